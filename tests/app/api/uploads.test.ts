import { existsSync, readFileSync } from 'node:fs';
import { appendFile, mkdir, rename } from 'node:fs/promises';
import { join } from 'node:path';
import pg from 'pg';
import { describe, expect, it, vi } from 'vitest';
import { reconcileUploads } from '@/app/api/uploads/reconcile-uploads';
import { models } from '@/models';
import { selectRow } from '@/models/queries/select';
import { releaseSessionLock, trySessionLock } from '@/models/session-locks';
import { callJson } from '../../helpers/call-route';
import {
  UPLOADS,
  VERSION,
  PIECE,
  bytes,
  bench,
  prepareUploads,
  metadata,
  send,
  begin,
  patch,
  head,
  offsetOf,
  recording,
  arrivingFile,
  stackPath,
} from '../../helpers/upload-bench';
import { until } from '../../helpers/until';

prepareUploads();

describe('one sender at a time', () => {
  it('a second sender is told to wait while the first is sending', async () => {
    const { location } = await begin();
    let finish: () => void = () => undefined;
    const slow = new ReadableStream<Uint8Array>({
      start(controller) {
        controller.enqueue(bytes.subarray(0, 1000));
        finish = () => {
          controller.enqueue(bytes.subarray(1000, 2000));
          controller.close();
        };
      },
    });
    const first = send('PATCH', location, { ...PIECE, 'upload-offset': '0' }, { body: slow });
    await new Promise((resolve) => setTimeout(resolve, 200));
    const second = await patch(location, 0, bytes.subarray(0, 10));
    expect(second.status).toBe(423);
    finish();
    expect((await first).headers.get('upload-offset')).toBe('2000');
  });

  it('a sender in another process holds the upload too', async () => {
    const { location, id } = await begin();
    const client = new pg.Client({ connectionString: bench.database.url });
    await client.connect();
    await client.query('SELECT pg_advisory_lock(hashtextextended($1, 0))', [`upload:${id}`]);
    expect((await patch(location, 0, bytes.subarray(0, 10))).status).toBe(423);
    await client.end();
    expect((await patch(location, 0, bytes.subarray(0, 10))).status).toBe(204);
    expect(await trySessionLock(`upload:${id}`)).toBe(true);
    await releaseSessionLock(`upload:${id}`);
  });

  it('uploads that a person sends to other processes count among those at once', async () => {
    const { location } = await begin();
    vi.stubEnv('BEADLINE_LIMIT_UPLOADS_AT_ONCE', '1');
    const other = new pg.Client({ connectionString: bench.database.url });
    await other.connect();
    const place = `upload-slot:${bench.rows.userId}:0`;
    await other.query('SELECT pg_advisory_lock(hashtextextended($1, 0))', [place]);
    const refused = await patch(location, 0, bytes.subarray(0, 10));
    expect([refused.status, refused.headers.get('retry-after')]).toEqual([429, '5']);
    expect(((await refused.json()) as { detail: string }).detail).toBe('At most 1 uploads at once.');
    await other.end();
    expect((await patch(location, 0, bytes.subarray(0, 10))).status).toBe(204);
    vi.unstubAllEnvs();
  });

  it('when the connection that holds the locks is lost its sender is cut off, since others may write from then on', async () => {
    const { location } = await begin();
    const endless = new ReadableStream<Uint8Array>({
      start: (controller) => controller.enqueue(bytes.subarray(0, 1000)),
    });
    const first = send('PATCH', location, { ...PIECE, 'upload-offset': '0' }, { body: endless });
    await until(
      () => offsetOf(location),
      (offset) => offset === 1000,
    );
    const client = new pg.Client({ connectionString: bench.database.url });
    await client.connect();
    await client.query(
      `SELECT pg_terminate_backend(pid) FROM pg_stat_activity
       WHERE application_name = 'beadline locks' AND datname = current_database()`,
    );
    await client.end();
    expect((await first).status).toBe(409);
    expect((await patch(location, 1000, bytes.subarray(1000))).status).toBe(204);
  });
});

describe('termination and expiration', () => {
  it('an unfinished upload can be given up: nothing is left behind', async () => {
    const { location, id, recordingId } = await begin();
    await patch(location, 0, bytes.subarray(0, 1000));
    expect((await send('DELETE', location, VERSION)).status).toBe(204);
    expect(existsSync(arrivingFile(id)) || existsSync(`${arrivingFile(id)}.json`)).toBe(false);
    expect((await head(location)).status).toBe(404);
    expect(await models().Recording.findByPk(recordingId)).toBeNull();
  });

  it('a finished one can’t', async () => {
    const { location, recordingId } = await begin();
    await patch(location, 0, bytes);
    expect((await send('DELETE', location, VERSION)).status).toBe(409);
    expect((await recording(recordingId)).state).toBe('checking');
  });

  it('the principal investigator may give up another’s, but not go on with it', async () => {
    const { location } = await begin();
    const other = { token: bench.lab.people.principal_investigator.token };
    expect((await send('HEAD', location, VERSION, other)).status).toBe(403);
    expect((await send('DELETE', location, VERSION, other)).status).toBe(204);
  });

  it('answers say when an upload expires, and each piece puts that off', async () => {
    const { location, id } = await begin();
    await models().Upload.update({ expiresAt: new Date(Date.now() + 60_000) }, { where: { id } });
    const response = await patch(location, 0, bytes.subarray(0, 10));
    const expires = Date.parse(response.headers.get('upload-expires')!);
    expect(expires).toBeGreaterThan(Date.now() + 6 * 86_400_000);
  });

  it('an expired upload answers 410 and is removed with its bytes', async () => {
    const { location, id, recordingId } = await begin();
    await models().Upload.update({ expiresAt: new Date(Date.now() - 1000) }, { where: { id } });
    expect((await head(location)).status).toBe(410);
    await reconcileUploads();
    expect(existsSync(arrivingFile(id))).toBe(false);
    expect(await models().Recording.findByPk(recordingId)).toBeNull();
  });
});

describe('after a crash', () => {
  it('a finished file whose commit was lost before the move is adopted', async () => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, bytes.subarray(0, 299_999));
    await appendFile(arrivingFile(id), bytes.subarray(299_999));
    await reconcileUploads();
    expect((await recording(recordingId)).state).toBe('checking');
    expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
  });

  it('a finished file whose commit was lost after the move is adopted, once', async () => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, bytes.subarray(0, 299_999));
    await appendFile(arrivingFile(id), bytes.subarray(299_999));
    await mkdir(join(bench.dataDir, 'stacks', recordingId), { recursive: true });
    await rename(arrivingFile(id), stackPath(recordingId));
    await reconcileUploads();
    await reconcileUploads();
    expect((await recording(recordingId)).state).toBe('checking');
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it.each([
    ['HEAD', (location: string) => head(location)],
    ['an empty piece at its end', (location: string) => patch(location, bytes.length, new Uint8Array(0))],
  ])('such a file has arrived for its sender too, and %s finishes it', async (_, ask) => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, bytes.subarray(0, 299_999));
    await appendFile(arrivingFile(id), bytes.subarray(299_999));
    await mkdir(join(bench.dataDir, 'stacks', recordingId), { recursive: true });
    await rename(arrivingFile(id), stackPath(recordingId));
    const answer = await ask(location);
    expect([answer.ok, answer.headers.get('upload-offset')]).toEqual([true, String(bytes.length)]);
    expect((await recording(recordingId)).state).toBe('checking');
    expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('expiry takes neither a finished upload nor one whose last byte has arrived', async () => {
    const past = { expiresAt: new Date(Date.now() - 8 * 86_400_000) };
    const finished = await begin();
    await patch(finished.location, 0, bytes);
    const arrived = await begin();
    await patch(arrived.location, 0, bytes.subarray(0, 299_999));
    await appendFile(arrivingFile(arrived.id), bytes.subarray(299_999));
    await models().Upload.update(past, { where: { id: [finished.id, arrived.id] } });
    await reconcileUploads();
    for (const { recordingId } of [finished, arrived]) {
      expect((await recording(recordingId)).state).toBe('checking');
      expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
    }
  });

  it('an upload that got bytes since the list was made is not taken for an expired one', async () => {
    const [waiting, living] = [await begin(), await begin()];
    const expired = { expiresAt: new Date(Date.now() - 1000) };
    await models().Upload.update(expired, { where: { id: [waiting.id, living.id] } });
    // While the first one is looked at, the second gets a piece.
    const client = new pg.Client({ connectionString: bench.database.url });
    await client.connect();
    await client.query('BEGIN');
    await client.query('SELECT id FROM uploads WHERE id = $1 FOR UPDATE', [waiting.id]);
    const reconciled = reconcileUploads();
    await until(() =>
      selectRow(
        `SELECT 1 FROM pg_stat_activity
         WHERE wait_event_type = 'Lock' AND datname = current_database() AND query LIKE 'DELETE FROM uploads%'`,
      ),
    );
    await models().Upload.update({ expiresAt: new Date(Date.now() + 60_000) }, { where: { id: living.id } });
    await client.query('ROLLBACK');
    await client.end();
    await reconciled;
    expect([(await head(waiting.location)).status, (await head(living.location)).status]).toEqual([404, 200]);
  });

  it('an unfinished upload is left alone', async () => {
    const { location } = await begin();
    await patch(location, 0, bytes.subarray(0, 1000));
    await reconcileUploads();
    expect(await offsetOf(location)).toBe(1000);
  });
});

describe('a folder of frames', () => {
  const folder = async (files: number, size: number) =>
    (
      await callJson<{ id: string; recordingId: string }>('POST', `/api/v1/runs/${bench.runId}/folders`, {
        token: bench.token,
        json: { name: 'frames', files, bytes: size },
      })
    ).body;

  it('is checked when its last file is in, whatever the order', async () => {
    const { id, recordingId } = await folder(3, 30);
    for (const position of ['2', '0', '1']) {
      expect((await recording(recordingId)).state).toBe('arriving');
      const { location, recordingId: same } = await begin(10, {
        filename: `f${position}.tif`,
        folder: id,
        position,
      });
      expect(same).toBe(recordingId);
      await patch(location, 0, bytes.subarray(0, 10));
    }
    expect(await recording(recordingId)).toMatchObject({ state: 'checking', kind: 'folder', bytes: 30 });
    expect(existsSync(join(bench.dataDir, 'stacks', recordingId, 'files', '000002.bin'))).toBe(true);
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('two last files at once ask for one check', async () => {
    const { id, recordingId } = await folder(2, 20);
    const uploads = await Promise.all(
      ['0', '1'].map((position) => begin(10, { filename: 'f.tif', folder: id, position })),
    );
    await Promise.all(uploads.map(({ location }) => patch(location, 0, bytes.subarray(0, 10))));
    expect((await recording(recordingId)).state).toBe('checking');
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('a place that is taken, or is none, answers 409', async () => {
    const { id } = await folder(2, 20);
    await begin(10, { folder: id, position: '0' });
    for (const position of ['0', '2']) {
      const headers = {
        ...VERSION,
        'upload-length': '10',
        'upload-metadata': metadata({ folder: id, position }),
      };
      expect((await send('POST', UPLOADS, headers)).status).toBe(409);
    }
  });

  it('its unfinished files are listed, so that they can be gone on with', async () => {
    const { id, recordingId } = await folder(2, 20);
    const { location } = await begin(10, { filename: 'f.tif', folder: id, position: '1' });
    await patch(location, 0, bytes.subarray(0, 4));
    const { body } = await callJson<{ items: unknown[] }>('GET', `/api/v1/runs/${bench.runId}/uploads`, {
      token: bench.token,
    });
    expect(body.items).toMatchObject([
      { recordingId, folderId: id, position: 1, filename: 'f.tif', bytes: 10, receivedBytes: 4 },
    ]);
    expect((await recording(recordingId)).receivedBytes).toBe(4);
  });
});
