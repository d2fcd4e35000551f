import type { Column, TableDefinition } from './column';

const text = (name: string, description: string): Column => ({ name, store: 'text', unit: '', description });
const whole = (name: string, description: string): Column => ({ name, store: 'int32', unit: '1', description }); // prettier-ignore

/** What people changed in the tracks, one row per step, in order. */
export const CORRECTIONS: TableDefinition = {
  name: 'corrections',
  title: 'Corrections of tracks',
  description:
    'Every correction that people appended, in order. Tables of the analysis are those of the last revision.',
  key: ['revision'],
  columns: [
    whole('revision', 'Revision of the tracks that the correction made.'),
    text(
      'kind',
      'split, join, trim, remove, add-point, move-point, reclass, mark-line, complete-frame or undo.',
    ),
    text('detail', 'What was changed, as JSON.'),
    text('by', 'Who corrected.'),
    text('at', 'When (UTC).'),
  ],
};

/** What people said of candidates, one row per step of each. */
export const JUDGEMENTS: TableDefinition = {
  name: 'judgements',
  title: 'Judgements of candidates',
  description:
    'Every verdict of every reader, changes of mind as further steps, and how disagreements were settled.',
  key: ['event', 'kind', 'by', 'step'],
  columns: [
    whole('event', 'Number of the candidate.'),
    text('kind', 'reading or settlement.'),
    whole('step', 'Counts the changes of mind of one reader from 1.'),
    text('verdict', 'yes, no or cannot-tell.'),
    text('reason', 'Reason that was chosen.'),
    text('note', 'In their own words.'),
    text('by', 'Who judged.'),
    text('at', 'When (UTC).'),
  ],
};

/** What the analyses of a package are, a row for each. */
export const ANALYSES: TableDefinition = {
  name: 'analyses',
  title: 'Analyses in this package',
  description: 'A row per analysis: where it comes from, its conditions, its combined line density.',
  key: ['folder'],
  columns: [
    text('folder', 'Folder of its files.'),
    text('analysis', 'Identifier.'),
    text('campaign', 'Campaign.'),
    text('run', 'Run.'),
    text('recording', 'Recording.'),
    text(
      'rehearsal',
      'Name of the rehearsal that made the recording: simulated, or planted particles. Empty for what a camera took.',
    ),
    text('sha256', 'SHA-256 of the recording as it was sent.'),
    { name: 'temperature_K', store: 'float64', unit: 'K', description: 'Temperature of the helium.' },
    { name: 'heat_flux_W_m2', store: 'float64', unit: 'W/m^2', description: 'Heat flux.' },
    { name: 'line_density_m2', store: 'float64', unit: 'm^-2', description: 'Combined line density; empty where methods disagree.' }, // prettier-ignore
    { name: 'line_density_low', store: 'float64', unit: 'm^-2', description: 'Lower end of its interval.' },
    { name: 'line_density_high', store: 'float64', unit: 'm^-2', description: 'Upper end of its interval.' },
    whole('tracks', 'Tracks.'),
    whole('tracks_revision', '0 as linked, else the number of corrections in force.'),
    text('code_version', 'Version of the code that computed.'),
    text('signed_off_at', 'When it was signed off; empty while it is not.'),
    text('signed_off_by', 'Who signed it off.'),
  ],
};

/** Columns of all tables. */
export const DICTIONARY: TableDefinition = {
  name: 'data-dictionary',
  title: 'Data dictionary',
  description: 'Every column of every table with its type, unit and meaning.',
  key: ['table', 'column'],
  columns: [
    text('table', 'Name of the table.'),
    text('column', 'Name of the column.'),
    text('type', 'integer, number or string.'),
    text('unit', 'Unit; 1 for pure numbers, empty for text.'),
    text('description', 'What it means.'),
  ],
};
