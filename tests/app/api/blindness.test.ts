import { beforeEach, describe, expect, it } from 'vitest';
import { ROUTES, type RouteKey } from '@/app/api/route-table';
import { grantFor } from '@/lib/access';
import * as views from '@/lib/views/review-view';
import { call, callJson } from '../../helpers/call-route';
import {
  addPerson,
  analysisId,
  candidates,
  ids,
  lab,
  makeSet,
  PI,
  put,
  readers,
  test,
  reviewLab,
} from '../../helpers/review-set';

reviewLab();

describe('blindness', () => {
  beforeEach(() => makeSet(2, 2));

  /** Every route that an annotator may read, with the ids of this set. */
  function readable(): string[] {
    const keys = (Object.keys(ROUTES) as RouteKey[]).filter(
      (key) => key.startsWith('GET ') && grantFor(['annotator'], ROUTES[key].action) !== null,
    );
    const known: Record<string, string> = { analysisId, candidateId: ids[0], campaignId: lab.campaignId };
    return keys.flatMap((key) => {
      const path = key.slice(4).replace(/\{(\w+)\}/g, (whole, name: string) => known[name] ?? whole);
      return path.includes('{') || /film|strip|progress|audit\.csv/.test(path) ? [] : [`/api/v1${path}`];
    });
  }

  it('no route tells a reader what another said: its answers are the same for yes and for no', async () => {
    const seen: string[][] = [];
    for (const verdict of ['yes', 'no', 'cannot-tell']) {
      await makeSet(2, 2);
      await put(ids[0], readers[0], verdict, 1, { reason: 'a telling reason', note: 'a telling note' });
      const answers: string[] = [];
      expect(readable().length).toBeGreaterThan(10);
      for (const path of readable()) {
        const response = await call('GET', path, { token: readers[1].token });
        const text = await response.text();
        expect(text, path).not.toContain('a telling');
        // Ids and times differ from set to set; revisions, counts and words may not.
        answers.push(`${path} ${text}`.replace(/[0-9a-f-]{36}|\d{4}-\d\d-\d\dT[\d:.]+Z|"[\w-]{40,}"/g, '#'));
      }
      // The lists of a laboratory grow with each set: those of this one are compared.
      seen.push(answers.filter((answer) => /^\S*(#|candidates)/.test(answer)));
    }
    expect(seen[1]).toEqual(seen[0]);
    expect(seen[2]).toEqual(seen[0]);
  });

  it('a reader sees the outcome of a candidate only with their own verdict, and only when it stands', async () => {
    await put(ids[0], readers[0], 'yes', 1);
    expect((await candidates(readers[0]))[0]).toMatchObject({
      review: 'hidden',
      verdict: null,
      ownVerdict: 'yes',
    });
    expect((await candidates(readers[1]))[0]).toMatchObject({
      review: 'hidden',
      verdict: null,
      ownVerdict: null,
    });
    await put(ids[0], readers[1], 'yes', 1);
    for (const reader of readers.slice(0, 2)) {
      expect((await candidates(reader))[0]).toMatchObject({ review: 'agreed', verdict: 'yes' });
    }
    expect((await candidates(readers[2]))[0]).toMatchObject({ review: 'hidden', verdict: null });
  });

  it('readers who disagree are not told so', async () => {
    await put(ids[0], readers[0], 'yes', 1);
    const { body } = await put(ids[0], readers[1], 'no', 1);
    expect(body.review).toBe('hidden');
    expect((await candidates(test.people.analyst))[0]).toMatchObject({ review: 'disagreed', verdict: null });
  });

  it.each(['GET /candidates/{candidateId}/readings', 'GET /disagreements'] as const)(
    '%s is for others',
    (key) => {
      expect(grantFor(['annotator'], ROUTES[key].action)).toBeNull();
    },
  );

  it('the audit trail says that somebody judged, not what', async () => {
    await put(ids[0], readers[0], 'cannot-tell', 1, { note: 'a telling note' });
    const { body } = await callJson('GET', '/api/v1/audit?action=verdict', { token: PI().token });
    expect(JSON.stringify(body)).toContain(ids[0]);
    expect(JSON.stringify(body)).not.toMatch(/cannot-tell|a telling/);
  });

  it('who may settle as well as judge reads no open candidate through the readings', async () => {
    const both = await addPerson('Reads and settles', ['annotator', 'principal_investigator']);
    await put(ids[0], readers[0], 'yes', 1);
    const { body } = await callJson<views.ReadingsView>('GET', `/api/v1/candidates/${ids[0]}/readings`, both);
    expect(body.readings).toEqual([]);
  });

  it('a verdict given with sight of the outcome says so, and no statistics count it', async () => {
    const both = await addPerson('Reads and downloads', ['annotator', 'analyst']);
    for (const reader of readers.slice(0, 2)) await put(ids[0], reader, 'yes', 1);
    await put(ids[0], both, 'no', 1);
    const { body } = await callJson<views.ReadingsView>('GET', `/api/v1/candidates/${ids[0]}/readings`, PI());
    expect(body.readings.map(({ blind }) => blind)).toEqual([true, true, false]);
  });
});
