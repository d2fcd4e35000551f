import { citationText } from './citation';
import { schemaType } from './column';
import type { ExportFormat } from './export-facts';
import { ANALYSES, CORRECTIONS, DICTIONARY, JUDGEMENTS } from './history-tables';
import { licenceOf } from './licences';
import { orcidUrl } from './orcid';
import type { PackedFile } from './packed-file';
import type { ExportPlan, PlannedAnalysis } from './plan';
import { sortedJson } from './sorted-json';
import { ANALYSIS_TABLES } from './table-definitions';

type Value = string | number | null;

export const dictionaryRows = (): Value[][] =>
  [...ANALYSIS_TABLES, CORRECTIONS, JUDGEMENTS, ANALYSES, DICTIONARY].flatMap(
    (table) =>
    table.columns.map((column) => [table.name, column.name, schemaType(column), column.unit, column.description]), // prettier-ignore
  );

export const analysesRows = ({ analyses }: ExportPlan): Value[][] =>
  analyses.map((one) => {
    const combined = one.measures.estimates.find(
      ({ quantity, method }) => quantity === 'line_density' && method === 'combined',
    );
    const { temperature_K, heatFlux_W_m2 } = one.conditions;
    return [one.folder, one.id, one.campaign.name, one.run.name, one.recording.name, one.rehearsal?.name ?? null, one.recording.sha256, temperature_K ?? null, heatFlux_W_m2 ?? null, combined?.value ?? null, combined?.low ?? null, combined?.high ?? null, one.summary?.tracks ?? null, one.tracksRevision, one.codeVersion, one.signedOff?.at ?? null, one.signedOff?.by ?? null]; // prettier-ignore
  });

export const correctionRows = ({ corrections }: PlannedAnalysis): Value[][] =>
  corrections.map(({ revision, kind, detail, by, at }) => [revision, kind, JSON.stringify(detail), by, at]);

export const judgementRows = ({ judgements }: PlannedAnalysis): Value[][] =>
  judgements.map(({ event, kind, step, verdict, reason, note, by, at }) => [event, kind, step, verdict, reason, note, by, at]); // prettier-ignore

/** Where the numbers of an analysis come from: input, settings, code, people. */
export function provenanceJson(analysis: PlannedAnalysis): string {
  const { id, campaign, run, recording, rehearsal, conditions, recipe, recipeName, imageFacts, summary } =
    analysis;
  const { codeVersion, createdBy, startedAt, finishedAt, signedOff, tracksRevision } = analysis;
  const { populations } = analysis.measures;
  return sortedJson({
    analysis: id,
    campaign,
    run,
    recording,
    rehearsal,
    conditions,
    recipe: { name: recipeName, values: recipe },
    imageFacts,
    summary,
    populations,
    tracksRevision,
    codeVersion,
    createdBy,
    startedAt,
    finishedAt,
    signedOff,
  });
}

/** What was measured beyond the tables: verdicts and notes that have no rows. Empty where the analysis is older. */
export function detailsJson({ measures }: PlannedAnalysis): string {
  const { details } = measures;
  if (!details) return sortedJson({});
  const { comparisons, overTime, profiles, shape, features } = details;
  return sortedJson({
    comparisons,
    transient: overTime.transient,
    densitiesOverTime: overTime.densities.map(({ method, note }) => ({ method, note })),
    profiles: profiles && { fromWall: profiles.fromWall, width_m: profiles.widthM, note: profiles.note },
    shape,
    features,
  });
}

/** Lines as `sha256sum --check` reads them. */
export const checksumLines = (files: readonly PackedFile[]): string =>
  files.map(({ path, sha256 }) => `${sha256}  ${path}\n`).join('');

/** What a person reads first. */
export function readmeText(plan: ExportPlan): string {
  const licence = licenceOf(plan.licence);
  const people = plan.contributors.map(
    ({ name, orcid, affiliation }) =>
      `- ${name}${affiliation ? `, ${affiliation}` : ''}${orcid ? `, ${orcidUrl(orcid)}` : ''}`,
  );
  return [
    `# ${plan.title}`,
    '',
    ...(plan.description ? [plan.description, ''] : []),
    `Cite as: ${citationText(plan)}`,
    '',
    `Licence: ${licence.name} (${licence.id}). ${licence.allows}`,
    '',
    ...(people.length > 0 ? ['## Contributors', '', ...people, ''] : []),
    '## What is in it',
    '',
    `${contents(plan)}; \`analyses.csv\` tells what they are. Each has a folder:`,
    '',
    ...plan.analyses.map(({ folder, campaign, run, recording, rehearsal }) => `- \`${folder}/\`: ${campaign.name}, ${run.name}, ${recording.name}${rehearsal ? `. ${rehearsalText(rehearsal.kind)}` : ''}`), // prettier-ignore
    '',
    '| file | holds |',
    '| --- | --- |',
    ...ANALYSIS_TABLES.map(
      ({ name, title, description }) => `| ${name} | ${title}. ${description.replaceAll('|', '\\|')} |`,
    ),
    '| corrections.csv, judgements.csv | what people changed and decided |',
    '| estimates.json | estimates with the inputs that they came from |',
    '| details.json | what else was measured, with notes: law of a growth or decay, beside what is expected, shape of lines |',
    ...(plan.analyses.some(({ strips }) => strips?.length)
      ? ['| strips/ | frames around closest approach of each reconnection, with both tracks, times and scale bar; the name has the number of the event |'] // prettier-ignore
      : []),
    '| provenance.json | input with its SHA-256, conditions, recipe, code version, people |',
    '',
    'Every column of every table stands in `data-dictionary.csv` with type, unit and meaning; so do the units in the files themselves: in the column names (CSV), in the key-value metadata (Parquet), in the attribute `unit` (HDF5), in the arrays `columns` and `units` (NumPy).',
    '',
    '`datapackage.json` describes the files as a Frictionless Data Package, `ro-crate-metadata.json` as an RO-Crate. `sha256sum --check checksums.sha256` tells whether every file is as it was packed.',
    '',
    '## To open it',
    '',
    ...howToOpen(plan),
    '',
    `Made by Beadline ${plan.codeVersion}.`,
    '',
  ].join('\n');
}

/** What must not be taken for a measurement says so wherever it is named. */
export const rehearsalText = (kind: 'simulated' | 'planted'): string =>
  kind === 'simulated'
    ? 'Rehearsal: simulated frames, no measurement.'
    : 'Rehearsal: particles of known truth planted in measured frames, no measurement.';

const OPENING: Record<ExportFormat, string[]> = {
  csv: ['import pandas', "tracks = pandas.read_csv('analysis-001/tracks.csv')"],
  parquet: ['import pandas', "tracks = pandas.read_parquet('analysis-001/tracks.parquet')"],
  npz: ['import numpy', "x_px = numpy.load('analysis-001/tracks.npz')['x_px']"],
  hdf5: ['import h5py', "x_px = h5py.File('analysis-001/tracks.h5')['x_px'][:]"],
};

function howToOpen({ formats }: ExportPlan): string[] {
  const python = ['```python', ...new Set(formats.flatMap((format) => OPENING[format])), '```'];
  const matlab = formats.includes('hdf5') ? ['', "MATLAB: `h5read('analysis-001/tracks.h5', '/x_px')`."] : [];
  const origin = formats.includes('csv') ? ['', 'Origin: Data, Connect to File, Text/CSV.'] : [];
  return [...python, ...matlab, ...origin];
}

function contents({ analyses }: ExportPlan): string {
  const signed = analyses.filter(({ signedOff }) => signedOff !== null).length;
  if (analyses.length === 1)
    return signed === 1 ? 'One analysis, signed off' : 'One analysis, not signed off';
  return `${analyses.length} analyses, ${signed === 0 ? 'none' : signed} of them signed off`;
}
