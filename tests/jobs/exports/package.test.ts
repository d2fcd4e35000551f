import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Profile } from 'datapackage';
import { readParquet, parquetMetadata } from '../../helpers/read-parquet';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { stopExport } from '@/jobs/build-export';
import { closeDoorbell } from '@/jobs/doorbell';
import { figuresOf } from '@/jobs/exports/analysis-figure-files';
import { exportFolder } from '@/jobs/exports/export-folder';
import { analysesRows, readmeText } from '@/lib/exports/package-texts';
import { roCrate } from '@/lib/exports/ro-crate';
import { ESTIMATES, TRACKS, VELOCITIES } from '@/lib/exports/table-definitions';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { planAnalyses } from '@/models/queries/export-plan';
import { execute } from '@/models/queries/select';
import { POINT_BRIDGED, POPULATIONS } from '@/tracking/types';
import { trackVelocities } from '@/tracking/velocities';
import { trackSlice } from '@/tracking/track-slice';
import { buildPackageOf, endOfPackage, orderPackage } from '../../helpers/built-package';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeLab, type LabRows } from '../../helpers/lab-rows';
import {
  measuredAnalysis,
  measuredScene,
  SCENE_CONDITIONS,
  SCENE_RECIPE,
} from '../../helpers/measured-analysis';
import { crateRules } from './crate-rules';

interface Table {
  csv_columns: string[];
  csv_rows: number;
  columns: string[];
  npz_units: string[];
  h5_units: string[];
  h5_dtypes: string[];
  npz: Record<string, (number | string | null)[]>;
  h5: Record<string, (number | string | null)[]>;
  csv: Record<string, (number | string | null)[]>;
}
interface Found {
  names: string[];
  times: string[];
  sums: Record<string, boolean>;
  tables: Record<'tracks' | 'velocities' | 'estimates', Table>;
}

/** A tracer that is caught within its track, the longest of the scene, whatever the scene has of that. */
const CHANGED = (() => {
  const { tracks } = measuredScene();
  const length = (i: number) => tracks.start[i + 1] - tracks.start[i];
  let track = 0;
  for (let i = 1; i < tracks.count; i++) if (length(i) > length(track)) track = i;
  const first = tracks.frame[tracks.start[track]];
  const last = tracks.frame[tracks.start[track + 1] - 1];
  const middle = (first + last) >> 1;
  return [
    { track, fromFrame: first, toFrame: middle, population: 'free', pTrapped: 0.015625 },
    { track, fromFrame: middle + 1, toFrame: last, population: 'trapped', pTrapped: 0.984375 },
  ];
})();
/** Population and probability in a frame, in which a change within the track counts. */
function stateIn(track: number, frame: number): [code: number, pTrapped: number] {
  const stretch = CHANGED.find((one) => one.track === track && one.fromFrame <= frame && frame <= one.toFrame); // prettier-ignore
  const { population, pTrapped } = measuredScene().measures.tracks;
  if (!stretch) return [population[track], pTrapped[track]];
  return [(POPULATIONS as readonly string[]).indexOf(stretch.population), stretch.pTrapped];
}

let db: FreshDatabase;
let lab: LabRows;
let analysisId: string;
let folder: string;
let found: Found;
let path: string;
const people = [
  { name: '=Mira, "Sol"', orcid: '0000-0002-1825-0097', affiliation: 'Hollow Reach Laboratory' },
  { name: 'Tomas Adeyemi', orcid: null, affiliation: null },
];
const wish = () => ({
  analyses: [analysisId],
  contributors: people,
  description: 'Simulated for the tests.',
});

beforeAll(async () => {
  db = await freshDatabase();
  const root = process.env.TEST_FOLDER ?? tmpdir();
  process.env.BEADLINE_DATA = mkdtempSync(join(root, 'exports-'));
  lab = await makeLab();
  analysisId = (await measuredAnalysis(lab, { run: '=1+1', recording: 'stack ä.tif' })).id;
  await execute(
    `UPDATE analysis_measures SET details = jsonb_set(details, '{segments}', $2::jsonb)
     WHERE analysis_id = $1`,
    [analysisId, JSON.stringify(CHANGED)],
  );
  await logCorrection(1, 'remove', { track: 0 });
  await logCorrection(2, 'undo', { of: '00000000-0000-7000-8000-000000000001' });
  ({ path } = await buildPackageOf(lab, { ...wish(), formats: ['csv', 'hdf5', 'parquet', 'npz'] }));
  folder = mkdtempSync(join(root, 'package-'));
  const python = process.env.TEST_PYTHON ?? '/usr/bin/python3';
  const script = join(process.cwd(), 'tests', 'oracles', 'read_package.py');
  const text = execFileSync(python, [script, path, folder], { maxBuffer: 1 << 28, encoding: 'utf8' });
  found = JSON.parse(text) as Found;
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

/** A line of the log of corrections, as the API would append it. */
const logCorrection = (seq: number, kind: string, fields: Record<string, unknown>) =>
  execute(
    `INSERT INTO corrections (id, lab_id, analysis_id, seq, kind, fields, created_by, created_at)
     VALUES ($1, $2, $3, $4, $5, $6, $7, '2026-03-04T05:06:07Z')`,
    [`00000000-0000-7000-8000-00000000000${seq}`, lab.labId, analysisId, seq, kind, JSON.stringify(fields), lab.userId], // prettier-ignore
  );

const text = (name: string) => readFileSync(join(folder, name), 'utf8');
const json = <T>(name: string) => JSON.parse(text(name)) as T;

/** Rows of the tracks table, straight from the kernels' own arrays: what the database was filled with. */
function trackColumns(): Record<string, (number | string | null)[]> {
  const { tracks } = measuredScene();
  const out: Record<string, (number | null)[]> = Object.fromEntries(
    TRACKS.columns.map(({ name }) => [name, []]),
  );
  for (let track = 0; track < tracks.count; track++) {
    for (let i = tracks.start[track]; i < tracks.start[track + 1]; i++) {
      const measured = !(tracks.flags[i] & POINT_BRIDGED);
      const values = [track, tracks.frame[i], tracks.frame[i] * 0.005, tracks.xPx[i], tracks.yPx[i], tracks.xPx[i] * 1e-5, tracks.yPx[i] * 1e-5, measured ? tracks.sxPx[i] : null, measured ? tracks.syPx[i] : null, measured ? tracks.brightness[i] : null, ...stateIn(track, tracks.frame[i])]; // prettier-ignore
      values.forEach((value, c) => out[TRACKS.columns[c].name].push(value !== null && Number.isNaN(value) ? null : value)); // prettier-ignore
    }
  }
  return out;
}

describe('a package as other programs read it', () => {
  it('unpacks with every checksum right, all entries of one fixed time', () => {
    expect(Object.values(found.sums).every(Boolean)).toBe(true);
    expect(found.times).toEqual(['(1980, 1, 1, 0, 0, 0)']);
    expect(found.names).toContain('datapackage.json');
    expect(found.names).toContain('analysis-001/tracks.parquet');
  });

  it('NumPy and h5py read the very numbers of the tracks', () => {
    const expected = trackColumns();
    const { npz, h5 } = found.tables.tracks;
    expect(npz).toEqual(expected);
    expect(h5).toEqual(expected);
  });

  it('NumPy and h5py read the very velocities', () => {
    const { tracks } = measuredScene();
    const rows: (number | null)[][] = [];
    for (let track = 0; track < tracks.count; track++) {
      for (const lag of SCENE_RECIPE.lagsFrames) {
        const v = trackVelocities(trackSlice(tracks, track), lag, SCENE_CONDITIONS);
        for (let i = 0; i < v.frame.length; i++) rows.push([track, v.frame[i], v.frame[i] * 0.005, lag, v.vxMS[i], v.vyMS[i], v.svxMS[i], v.svyMS[i], stateIn(track, v.frame[i])[0]]); // prettier-ignore
      }
    }
    const { npz, h5 } = found.tables.velocities;
    VELOCITIES.columns.forEach(({ name }, c) => {
      const expected = rows.map((row) => row[c]);
      expect(npz[name]).toEqual(expected);
      expect(h5[name]).toEqual(expected);
    });
  });

  it('pandas reads the CSV to its written digits, and populations by name', () => {
    const expected = trackColumns();
    const { csv, csv_rows } = found.tables.tracks;
    expect(csv_rows).toBe(expected.track.length);
    csv.x_px.forEach((x, i) => expect(Math.abs((x as number) - (expected.x_px[i] as number))).toBeLessThan(6e-5)); // prettier-ignore
    expect(csv.population).toEqual(expected.population.map((code) => POPULATIONS[code as number]));
  });

  it('the estimates are those of the database, with units and words beside the columns', () => {
    const { estimates } = measuredScene().measures;
    const { npz, h5, csv_columns, npz_units, h5_units } = found.tables.estimates;
    expect(npz.value).toEqual(estimates.map(({ value }) => value));
    expect(h5.value).toEqual(npz.value);
    expect(h5.method).toEqual(estimates.map(({ method }) => method));
    expect(csv_columns).toEqual(ESTIMATES.columns.map(({ name }) => name));
    expect(npz_units).toEqual(ESTIMATES.columns.map(({ unit }) => unit));
    expect(h5_units).toEqual(npz_units);
  });

  it('another reader of Parquet finds the same tracks, with units in its metadata', async () => {
    const table = await readParquet(join(folder, 'analysis-001', 'tracks.parquet'));
    const expected = trackColumns();
    for (const { name, store } of TRACKS.columns) {
      const wanted = store === 'code' ? expected[name].map((code) => POPULATIONS[code as number]) : expected[name]; // prettier-ignore
      expect(table[name]).toEqual(wanted);
    }
    const metadata = await parquetMetadata(join(folder, 'analysis-001', 'tracks.parquet'));
    expect(metadata.get('unit:x_px')).toBe('px');
  });
});

describe('its descriptions', () => {
  it('datapackage.json keeps to the published profile, and names every file with its size and hash', async () => {
    const descriptor = json<{ resources: { path: string; bytes: number; hash: string; name: string }[] }>('datapackage.json'); // prettier-ignore
    const profile = await Profile.load('data-package');
    const { valid, errors } = profile.validate(descriptor);
    expect(errors.map(String)).toEqual([]);
    expect(valid).toBe(true);
    // The profile that refuses nothing would prove nothing.
    expect(profile.validate({ ...descriptor, resources: [{ path: '../x' }] }).valid).toBe(false);
    for (const { path: name, bytes, hash } of descriptor.resources) {
      const file = readFileSync(join(folder, name));
      expect([name, bytes, hash]).toEqual([name, file.length, `sha256:${createHash('sha256').update(file).digest('hex')}`]); // prettier-ignore
    }
    const others = found.names.filter(
      (name) => !['datapackage.json', 'ro-crate-metadata.json'].includes(name),
    );
    expect(descriptor.resources.map(({ path: name }) => name).sort()).toEqual(others.sort());
    expect(new Set(descriptor.resources.map(({ name }) => name)).size).toBe(descriptor.resources.length);
  });

  it.each(crateRules)('RO-Crate 1.2, $section: $rule', ({ holds }) => {
    const crate = json<{ '@context': unknown; '@graph': Record<string, unknown>[] }>(
      'ro-crate-metadata.json',
    );
    expect(holds(crate, found.names)).toBe(true);
  });

  it('leads from the recording’s SHA-256 through code, recipe and conditions to the files', () => {
    const graph = json<{ '@graph': Record<string, unknown>[] }>('ro-crate-metadata.json')['@graph'];
    const action = graph.find((one) => one['@type'] === 'CreateAction')!;
    const idOf = (one: unknown) => (one as { '@id': string })['@id'];
    const entity = (id: string) => graph.find((one) => one['@id'] === id)!;
    const objects = (action.object as unknown[]).map(idOf).map(entity);
    expect(objects.some(({ identifier }) => identifier === `sha256:${'ab'.repeat(32)}`)).toBe(true);
    const value = (name: string) => objects.find((one) => one.name === name);
    expect(value('condition.temperature_K')).toMatchObject({ value: 1.85, unitText: 'K' });
    expect(value('recipe.closestApproach_m')).toMatchObject({ value: 4e-5, unitText: 'm' });
    expect(entity(idOf(action.instrument))).toMatchObject({
      '@type': 'SoftwareApplication',
      version: 'test',
    });
    expect((action.result as unknown[]).map(idOf)).toContain('analysis-001/tracks.csv');
    expect(entity('https://orcid.org/0000-0002-1825-0097')).toMatchObject({ '@type': 'Person' });
  });

  it('holds every correction, those taken back too, with who made it and when', () => {
    const name = 'Test Person';
    expect(text('analysis-001/corrections.csv').trim().split('\r\n')).toEqual([
      'revision,kind,detail,by,at',
      `1,remove,"{""track"":0}",${name},2026-03-04T05:06:07.000Z`,
      `2,undo,"{""of"":""00000000-0000-7000-8000-000000000001""}",${name},2026-03-04T05:06:07.000Z`,
    ]);
  });

  it('holds what else was measured: over time, profiles, accelerations, tails, captures, with notes', () => {
    const { details, motion, pdfs } = measuredScene().measures;
    const places = pdfs.reduce((sum, { kernel }) => sum + (kernel?.atMS.length ?? 0), 0);
    const rows = (name: string) => text(`analysis-001/${name}.csv`).trim().split('\r\n').slice(1);
    expect(rows('over-time')).toHaveLength(details.overTime.timeS.length * (2 + details.overTime.densities.length)); // prettier-ignore
    expect(rows('over-time').filter((row) => row.startsWith('trapped_tracers,count,m^-2,'))).toHaveLength(details.overTime.timeS.length); // prettier-ignore
    const strips = details.profiles!.placeM.length;
    expect(rows('profiles')).toHaveLength(strips * (details.profiles!.densityM2 ? 4 : 3));
    expect(rows('accelerations')).toHaveLength(details.accelerations.length);
    expect(rows('velocity-tails')).toHaveLength(motion.tails.length);
    expect(places).toBeGreaterThan(100);
    expect(rows('velocity-kernel')).toHaveLength(places);
    expect(rows('changes-of-state')).toHaveLength(details.changes.length);
    const told = json<Record<string, unknown>>('analysis-001/details.json');
    expect(told.transient).toEqual(JSON.parse(JSON.stringify(details.overTime.transient)));
    expect(told.comparisons).toHaveLength(details.comparisons.length);
  });

  it('a cell that a spreadsheet would compute is made harmless', () => {
    expect(text('analyses.csv')).toContain(",'=1+1,");
    expect(text('analyses.csv')).not.toMatch(/(^|,)=1/m);
  });
});

describe('building', () => {
  it('the same analyses make the same bytes again', async () => {
    const again = await buildPackageOf(lab, { ...wish(), formats: ['csv', 'hdf5', 'parquet', 'npz'] });
    expect(again.view.sha256).toBe(createHash('sha256').update(readFileSync(path)).digest('hex'));
  }, 120_000);

  it('figures come as vectors with their fonts and as pictures, at both widths, with their numbers', async () => {
    const aside = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'figures-'));
    const figures = figuresOf(measuredScene());
    expect(figures.map(({ name }) => name)).toContain('velocity-pdf-across');
    await figures.find(({ name }) => name === 'line-density')!.write(aside);
    const made = (ending: string) => readFileSync(join(aside, `line-density${ending}`));
    // 86 mm are 243.78 points.
    expect(made('-86mm.svg').toString()).toContain('width="243.78pt"');
    expect(made('-86mm.svg').toString()).toContain('data:font/ttf;base64,');
    expect(made('-178mm.pdf').toString('latin1')).toMatch(/^%PDF-/);
    expect(made('-178mm.pdf').toString('latin1')).toContain('/FontFile2');
    // Width of the picture (PNG specification, IHDR): 86 mm at 600 dpi.
    expect(Math.abs(made('-86mm.png').readUInt32BE(16) - (86 / 25.4) * 600)).toBeLessThan(2);
    expect(made('.csv').toString()).toContain('line density (10^8 m^-2)');
  }, 120_000);

  it('goes on where an earlier try broke off: what was finished is not made again', async () => {
    const id = await orderPackage(lab, { ...wish(), formats: ['csv', 'hdf5', 'parquet', 'npz'] });
    // As a worker that dies leaves it: its claim silent, a part of the files made.
    const { finishedFiles } = await import('@/jobs/exports/finished-files');
    const { workFolder } = await import('@/jobs/exports/export-folder');
    const { mkdirSync, writeFileSync } = await import('node:fs');
    const place = { folder: workFolder(id), attempt: 0, signal: new AbortController().signal };
    mkdirSync(place.folder, { recursive: true });
    await finishedFiles(place, { name: 'analysis-001-tracks', into: 'analysis-001' }, async (aside) => {
      writeFileSync(join(aside, 'tracks.csv'), 'made before\r\n');
      return ['tracks.csv'];
    });
    expect((await endOfPackage(lab, id)).state).toBe('done');
    const { packageFile } = await import('@/jobs/exports/export-folder');
    const kept = execFileSync('/usr/bin/python3', ['-c', "import zipfile,sys\nprint(zipfile.ZipFile(sys.argv[1]).read('analysis-001/tracks.csv').decode(),end='')", packageFile(id)]).toString(); // prettier-ignore
    expect(kept).toBe('made before\r\n');
  }, 120_000);

  it('says of a rehearsal, wherever it is named, that it is no measurement', async () => {
    const [plain] = await planAnalyses(lab.labId, [analysisId]);
    expect(plain.rehearsal).toBeNull();
    await execute(
      `INSERT INTO rehearsals (id, lab_id, name, kind, plan, recipe_request, state, run_id, recording_id, created_by)
       VALUES ($1, $2, 'Plan of May', 'simulated', '{}', '{}', 'done', $3, $4, $5)`,
      ['00000000-0000-7000-8000-0000000000aa', lab.labId, plain.run.id, plain.recording.id, lab.userId],
    );
    const [marked] = await planAnalyses(lab.labId, [analysisId]);
    expect(marked.rehearsal).toMatchObject({ name: 'Plan of May', kind: 'simulated' });
    const plan = { title: 'T', description: '', laboratory: 'L', licence: 'CC-BY-4.0', contributors: [], formats: ['csv' as const], figures: false, codeVersion: 'v', date: '2026-01-01', analyses: [marked] }; // prettier-ignore
    expect(readmeText(plan)).toContain('simulated frames, no measurement');
    expect(analysesRows(plan)[0]).toContain('Plan of May');
    expect(JSON.stringify(roCrate(plan, []))).toContain('simulated frames, no measurement');
    await execute('DELETE FROM rehearsals WHERE lab_id = $1', [lab.labId]);
  });

  it('a stopped package is not built, and nothing of it stays', async () => {
    const id = await orderPackage(lab, wish());
    await getSequelize().transaction((transaction) => stopExport(lab.labId, id, transaction));
    const jobs = await models().JobRun.findAll({ where: { subjectId: id } });
    expect(jobs.map(({ state }) => state)).toEqual(['stopped']);
    expect((await endOfPackage(lab, id)).state).toBe('stopped');
    expect(() => readFileSync(join(exportFolder(id), 'package.zip'))).toThrow();
  });
});
