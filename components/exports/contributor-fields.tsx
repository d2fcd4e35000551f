'use client';

import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';

/** A person as typed. */
export interface ContributorEntry {
  name: string;
  orcid: string;
  affiliation: string;
}

interface ContributorFieldsProps {
  people: readonly ContributorEntry[];
  onChange: (people: readonly ContributorEntry[]) => void;
  errorOf: (path: string) => string | undefined;
}

/** Who is to be named, in order. */
export function ContributorFields({ people, onChange, errorOf }: ContributorFieldsProps) {
  const change = (at: number, part: Partial<ContributorEntry>) =>
    onChange(people.map((one, i) => (i === at ? { ...one, ...part } : one)));
  return (
    <fieldset className="min-w-0">
      <legend className="pb-1 text-note font-strong">Contributors</legend>
      {people.map(({ name, orcid, affiliation }, i) => (
        <div
          key={i}
          className="grid grid-cols-1 items-start gap-x-3 gap-y-2 pb-3 hand:grid-cols-[minmax(0,1.2fr)_200px_minmax(0,1.4fr)_auto]"
        >
          <Field
            label="Name"
            value={name}
            onChange={({ target }) => change(i, { name: target.value })}
            error={errorOf(`contributors.${i}.name`)}
          />
          <Field
            label="ORCID iD"
            value={orcid}
            placeholder="0000-0000-0000-0000"
            spellCheck={false}
            onChange={({ target }) => change(i, { orcid: target.value })}
            error={errorOf(`contributors.${i}.orcid`)}
          />
          <Field
            label="Affiliation"
            value={affiliation}
            onChange={({ target }) => change(i, { affiliation: target.value })}
            error={errorOf(`contributors.${i}.affiliation`)}
          />
          <span className="pt-[19px]">
            <Button
              kind="bare"
              aria-label={`Leave out ${name || `contributor ${i + 1}`}`}
              onClick={() => onChange(people.filter((_, k) => k !== i))}
            >
              Leave out
            </Button>
          </span>
        </div>
      ))}
      <Button onClick={() => onChange([...people, { name: '', orcid: '', affiliation: '' }])}>
        Add a person
      </Button>
    </fieldset>
  );
}
