'use client';

import { SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import type { Recipe } from '@/tracking/types';
import type { RecipeErrors, RecipeTexts } from './recipe-form-values';
import { RECIPE_GROUPS, type RecipeGroup } from './recipe-words';

interface RecipeFieldsProps {
  texts: RecipeTexts;
  errors: RecipeErrors;
  onText: (field: keyof Recipe, text: string) => void;
  /** Which groups are shown; all unless told. */
  groups?: readonly RecipeGroup[];
  columns: string;
}

const EFFORTS = [
  { value: '', label: 'auto' },
  { value: 'full', label: 'full' },
  { value: 'quick', label: 'quick' },
];

/** The settings of an analysis in plain words; an empty field leaves the value to the machine. */
export function RecipeFields({ texts, errors, onText, groups = RECIPE_GROUPS, columns }: RecipeFieldsProps) {
  return (
    <>
      {groups.map(({ title, words }) => (
        <fieldset key={title} className="min-w-0 pb-4">
          <legend className="mb-[10px] w-full border-b border-line pb-[6px] text-note font-strong">
            {title}
          </legend>
          <div className={`grid gap-x-[14px] gap-y-3 ${columns}`}>
            {words.map((word) =>
              word.field === 'effort' ? (
                <SelectField
                  key={word.field}
                  label={word.label}
                  help={word.help}
                  error={errors[word.field]}
                  options={EFFORTS}
                  value={texts[word.field]}
                  onChange={(event) => onText(word.field, event.target.value)}
                />
              ) : (
                <Field
                  key={word.field}
                  label={word.label}
                  unit={word.unit}
                  help={word.help}
                  error={errors[word.field]}
                  inputMode={word.field === 'lagsFrames' ? 'text' : 'decimal'}
                  autoComplete="off"
                  spellCheck={false}
                  placeholder="auto"
                  value={texts[word.field]}
                  onChange={(event) => onText(word.field, event.target.value)}
                />
              ),
            )}
          </div>
        </fieldset>
      ))}
    </>
  );
}
