'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { api, ApiError } from '@/components/data/api-client';
import { SelectionBar } from '@/components/selection/selection-bar';
import { useSelection } from '@/components/selection/use-selection';
import { Button } from '@/components/ui/button';
import { Checkbox, SelectField } from '@/components/ui/choice';
import { Field, TextArea } from '@/components/ui/field';
import { MarginNote } from '@/components/ui/margin-note';
import { ErrorState } from '@/components/ui/page-states';
import { PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { EXPORT_FORMATS, type ExportFormat } from '@/lib/exports/export-facts';
import type { ExportableAnalysis } from '@/lib/exports/exportable';
import { LICENCES, licenceOf } from '@/lib/exports/licences';
import type { ExportView } from '@/lib/views/export-view';
import { ChooseAnalyses } from './choose-analyses';
import { ContentsNote } from './contents-note';
import { ContributorFields, type ContributorEntry } from './contributor-fields';
import { ExportHistory } from './export-history';

const FORMAT_WORDS: Record<ExportFormat, { label: string; help: string }> = {
  csv: { label: 'CSV', help: 'Opens everywhere, in spreadsheets too.' },
  hdf5: { label: 'HDF5', help: 'MATLAB, h5py; parts of 2 million rows.' },
  parquet: { label: 'Parquet', help: 'Small and quick for large tables.' },
  npz: { label: 'NumPy', help: 'Arrays for Python, one per column.' },
};

interface ExportSheetProps {
  analyses: readonly ExportableAnalysis[];
  /** Of the last package, to begin with. */
  contributors: readonly { name: string; orcid: string | null; affiliation: string | null }[];
  viewer: { id: string; name: string; mayStopAll: boolean; mayEditAll: boolean };
  chosen: readonly string[];
  campaigns: readonly { id: string; name: string; runs: number }[];
  tags: readonly string[];
}

/** Every analysis that was offered so far, by id. */
function useSeen(analyses: readonly ExportableAnalysis[]): ReadonlyMap<string, ExportableAnalysis> {
  const [seen, setSeen] = useState(() => new Map(analyses.map((one) => [one.id, one])));
  const fresh = analyses.filter(({ id }) => !seen.has(id));
  if (fresh.length > 0) setSeen(new Map([...seen, ...fresh.map((one) => [one.id, one] as const)]));
  return seen;
}

/** A data package in three steps, and those that were made before. */
export function ExportSheet({
  analyses,
  contributors,
  viewer,
  chosen: first,
  campaigns,
  tags,
}: ExportSheetProps) {
  // prettier-ignore
  const selection = useSelection();
  const seen = useSeen(analyses);
  const client = useQueryClient();
  const [chosen, setChosen] = useState<ReadonlySet<string>>(() => new Set(first));
  const [formats, setFormats] = useState<readonly ExportFormat[]>(['csv']);
  const [figures, setFigures] = useState(true);
  const [title, setTitle] = useState('');
  const [description, setDescription] = useState('');
  const [licence, setLicence] = useState(LICENCES[0].id);
  const [people, setPeople] = useState<readonly ContributorEntry[]>(() =>
    contributors.length > 0
      ? contributors.map(({ name, orcid, affiliation }) => ({ name, orcid: orcid ?? '', affiliation: affiliation ?? '' })) // prettier-ignore
      : [{ name: viewer.name, orcid: '', affiliation: '' }],
  );
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<ApiError | null>(null);
  const errorOf = (path: string) => problem?.errors.find((error) => error.path === path)?.message;

  async function build() {
    setBusy(true);
    setProblem(null);
    try {
      const named = people.filter(({ name }) => name.trim() !== '');
      await api<ExportView>('/api/v1/exports', {
        method: 'POST',
        idempotencyKey: crypto.randomUUID(),
        body: {
          analyses: [...chosen],
          formats,
          figures,
          licence,
          ...(title.trim() ? { title } : {}),
          ...(description.trim() ? { description } : {}),
          contributors: named.map(({ name, orcid, affiliation }) => ({
            name,
            ...(orcid.trim() ? { orcid } : {}),
            ...(affiliation.trim() ? { affiliation } : {}),
          })),
        },
      });
      setChosen(new Set());
      setTitle('');
      await client.invalidateQueries({ queryKey: ['list'] });
    } catch (error) {
      setProblem(error instanceof ApiError ? error : new ApiError(0, 'INTERNAL', 'That did not work.'));
    } finally {
      setBusy(false);
    }
  }

  // What was chosen under another selection goes in as well.
  const points = [...chosen].reduce((sum, id) => sum + (seen.get(id)?.points ?? 0), 0);
  return (
    <Sheet
      marginLabel="Contents of the package"
      margin={
        <>
          <ContentsNote analyses={chosen.size} points={points} formats={formats} figures={figures} />
          <MarginNote title="The same data, the same bytes">
            A package of signed-off analyses can be built again at any time and comes out the same, byte for
            byte. Compare its SHA-256.
          </MarginNote>
        </>
      }
    >
      <PageTitle>Exports</PageTitle>
      <Section title="1 Choose" count={chosen.size > 0 ? `${chosen.size} chosen` : undefined}>
        <SelectionBar selection={selection} campaigns={campaigns} tags={tags} viewer={viewer} />
        <ChooseAnalyses
          analyses={analyses}
          chosen={chosen}
          onChoose={setChosen}
          narrowed={selection.query !== ''}
        />
        <fieldset className="min-w-0 mt-4">
          <legend className="text-small text-ink-2">Formats of the tables</legend>
          <div className="grid grid-cols-1 gap-x-6 gap-y-2 pt-1 hand:grid-cols-2 desk:grid-cols-5">
            {EXPORT_FORMATS.map((format) => (
              <Checkbox
                key={format}
                label={FORMAT_WORDS[format].label}
                help={FORMAT_WORDS[format].help}
                checked={formats.includes(format)}
                onChange={
                  ({ target }) =>
                  setFormats(EXPORT_FORMATS.filter((one) => (one === format ? target.checked : formats.includes(one)))) // prettier-ignore
                }
              />
            ))}
            <Checkbox
              label="Figures"
              help="SVG, PDF and PNG, 86 and 178 mm wide."
              checked={figures}
              onChange={({ target }) => setFigures(target.checked)}
            />
          </div>
        </fieldset>
      </Section>
      <Section title="2 Name">
        <div className="grid gap-3 py-2">
          <Field
            label="Title"
            value={title}
            onChange={({ target }) => setTitle(target.value)}
            error={errorOf('title')}
            help="As it will be cited; left out, it is made of the laboratory and the number of analyses."
          />
          <TextArea
            label="Description"
            value={description}
            onChange={({ target }) => setDescription(target.value)}
            error={errorOf('description')}
          />
          <ContributorFields people={people} onChange={setPeople} errorOf={errorOf} />
        </div>
      </Section>
      <Section title="3 Licence">
        <div className="grid max-w-[560px] gap-3 py-2">
          <SelectField
            label="Licence"
            value={licence}
            onChange={({ target }) => setLicence(target.value)}
            options={LICENCES.map(({ id, name }) => ({ value: id, label: name }))}
            help={licenceOf(licence).allows}
          />
        </div>
        {problem ? (
          <div className="py-2">
            <ErrorState live what={problem.message} />
          </div>
        ) : null}
        <div className="pt-2">
          <Button
            kind="main"
            busy={busy}
            reason={
              chosen.size === 0
                ? 'Choose at least one analysis.'
                : formats.length === 0
                  ? 'Choose at least one format.'
                  : null
            }
            onClick={() => void build()}
          >
            Build the package
          </Button>
        </div>
      </Section>
      <ExportHistory viewer={viewer} />
    </Sheet>
  );
}
