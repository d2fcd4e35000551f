'use client';

import { useId, type ReactNode } from 'react';
import { boxClasses, describedBy, FieldFrame } from '@/components/ui/field-frame';
import { Chevron } from '@/components/ui/choice';
import { Unit } from '@/components/ui/quantity';
import { FIELD_UNITS, fieldUnit, type FieldUnit } from '@/lib/run-form/fields';
import type { ConditionName } from '@/lib/schemas/conditions';

interface QuantityFieldProps {
  field: ConditionName;
  label: string;
  text: string;
  unit?: string;
  onText: (field: ConditionName, text: string) => void;
  onUnit: (field: ConditionName, unit: string) => void;
  /** Once the field has been left. */
  onLeave?: (field: ConditionName) => void;
  error?: string | null;
  warning?: ReactNode;
  help?: ReactNode;
  disabled?: boolean;
}

/** A number and its unit in one box; where the trade writes it in several units, the unit is a choice. */
export function QuantityField({
  field,
  label,
  text,
  unit,
  onText,
  onUnit,
  onLeave,
  ...words
}: QuantityFieldProps) {
  const id = useId();
  const messageId = `${id}-words`;
  const units: readonly FieldUnit[] = FIELD_UNITS[field];
  const chosen = fieldUnit(field, unit);
  const { disabled, ...rest } = words;
  return (
    <FieldFrame id={id} messageId={messageId} label={label} {...rest}>
      <span
        className={`flex h-10 items-center pl-[9px] hand:h-control pointer-coarse:h-control-touch has-[input:focus-visible]:outline-2 has-[input:focus-visible]:outline-offset-1 has-[input:focus-visible]:outline-violet has-[:disabled]:border-dashed has-[:disabled]:bg-transparent ${boxClasses(rest)}`}
      >
        <input
          id={id}
          inputMode="decimal"
          autoComplete="off"
          spellCheck={false}
          value={text}
          disabled={disabled}
          onChange={(event) => onText(field, event.target.value)}
          onBlur={() => onLeave?.(field)}
          className="w-full min-w-0 bg-transparent tabular-nums outline-none disabled:cursor-not-allowed disabled:text-ink-3"
          {...describedBy({ label, ...rest }, messageId)}
        />
        {units.length === 1 ? (
          <span className="whitespace-nowrap px-[9px] text-note text-ink-2">
            <Unit>{chosen.key}</Unit>
          </span>
        ) : (
          <span className="relative h-full shrink-0">
            <select
              aria-label={`Unit of ${label.toLowerCase()}`}
              value={chosen.key}
              disabled={disabled}
              onChange={(event) => onUnit(field, event.target.value)}
              className="h-full appearance-none bg-transparent pl-1 pr-[22px] text-right text-note text-ink-2 focus-visible:outline-offset-1 disabled:text-ink-3"
            >
              {units.map(({ key }) => (
                <option key={key} value={key} className="bg-leaf">
                  {key}
                </option>
              ))}
            </select>
            <Chevron className="pointer-events-none absolute right-[9px] top-1/2 -translate-y-1/2" />
          </span>
        )}
      </span>
    </FieldFrame>
  );
}
