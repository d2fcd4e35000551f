import { describe, expect, it } from 'vitest';
import type { ListView } from '@/lib/views/common';
import * as views from '@/lib/views/review-view';
import type { Conditions } from '@/tracking/types';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { execute, selectRows } from '@/models/queries/select';
import { callJson } from '../../helpers/call-route';
import {
  analysisId,
  column,
  ids,
  lab,
  makeSet,
  PI,
  put,
  readers,
  reviewLab,
  settle,
} from '../../helpers/review-set';
import { makeCandidates } from '../../helpers/candidates';
import { makeAnalysis, makeRecording, makeRun } from '../../helpers/lab-rows';

reviewLab();

describe('statistics of readers', () => {
  it('are kappa of the blind verdicts, pair by pair, and against what was settled', async () => {
    const said = ['yes yes', 'yes yes', 'yes no', 'no no', 'no no', 'no yes', 'cannot-tell no', 'yes yes'];
    await makeSet(2, said.length);
    for (const [i, answers] of said.entries()) {
      const [first, second] = answers.split(' ');
      await put(ids[i], readers[0], first, 1);
      await put(ids[i], readers[1], second, 1);
    }
    // What readers agree on and what only they disagree on rests on their own words; this is the other's.
    for (const [i, verdict] of Object.entries({ 0: 'yes', 2: 'no', 3: 'no', 5: 'yes', 6: 'no' })) {
      expect((await settle(ids[Number(i)], verdict, 'Why.')).status).toBe(201);
    }
    const { body } = await callJson<ListView<views.ReaderView>>('GET', `/api/v1/readers?campaign=${lab.campaignId}`, PI()); // prettier-ignore
    const rows = body.items.map((item) => views.readerViewSchema.parse(item));
    const first = rows.find(({ reader }) => reader.id === readers[0].userId)!;
    expect(first).toMatchObject({ judged: 8, yes: 4, no: 3, cannotTell: 1, changed: 0 });
    // Counted by hand from `said`: rows first reader, columns second; yes, no, cannot-tell.
    const between = cohenKappa([3, 1, 0, 1, 2, 0, 0, 1, 0]);
    expect(first.others).toMatchObject([
      { reader: { id: readers[1].userId }, count: 8, kappa: between.kappa },
    ]);
    // The first's yes, yes, no, no, can't tell against yes, no, no, yes, no; what they agreed on otherwise is left out.
    const settled = cohenKappa([1, 1, 0, 1, 1, 0, 0, 1, 0]);
    expect(first.settled).toMatchObject({ count: 5, kappa: settled.kappa, low: settled.low });
    expect(first.known).toBeNull();
  });

  it('tell a reader only of themselves', async () => {
    const { body } = await callJson<ListView<views.ReaderView>>('GET', '/api/v1/readers', readers[0]);
    expect(body.items.map(({ reader, others }) => [reader.id, others])).toEqual([[readers[0].userId, []]]);
  });
});

describe('the order of a queue', () => {
  it('puts the doubtful first and does not depend on what others said', async () => {
    const q = [0.5, 0.0001, 0.11, 0.09, 0.1];
    const fields = (event: number) => ({ qValue: q[event], failed: event === 4 ? ['One.', 'Two.'] : [] });
    await makeSet(2, q.length, fields);
    const order = async () => {
      const path = `/api/v1/analyses/${analysisId}/review-queue`;
      const { body } = await callJson<views.ReviewQueueView>('GET', path, readers[1]);
      return body.items.map(({ event }) => event);
    };
    // |ln(q / 0.1)|: 0.11 and 0.09 are near, then 0.5, then 0.0001; what fails two criteria comes last.
    expect(await order()).toEqual([2, 3, 0, 1, 4]);
    await put(ids[0], readers[0], 'yes', 1);
    expect(await order()).toEqual([2, 3, 0, 1, 4]);
  });
});

describe('candidates of known truth', () => {
  /** A rehearsal with candidates, of which every other one is an event. */
  async function rehearse(count: number, conditions?: Conditions): Promise<string[]> {
    const { labId, userId } = lab;
    const there = await models().Campaign.findOne({ where: { labId, rehearsal: true } as never });
    const campaignId = there?.id ?? newId();
    if (!there) {
      await models().Campaign.create({ id: campaignId, labId, name: 'R', createdBy: userId });
      await execute('UPDATE campaigns SET rehearsal = true WHERE id = $1', [campaignId]);
    }
    const run = await makeRun({ labId, userId, campaignId });
    const recording = await makeRecording({ labId, userId, campaignId }, { runId: run.id });
    await execute(
      `INSERT INTO rehearsals (id, lab_id, name, kind, plan, recipe_request, run_id, recording_id, state)
       VALUES ($1, $2, 'R', 'simulated', '{}', '{}', $3, $4, 'done')`,
      [newId(), labId, run.id, recording.id],
    );
    const analysis = await makeAnalysis(
      { labId, userId, campaignId },
      { recordingId: recording.id, state: 'done', stage: 'done', ...(conditions ? { conditions } : {}) },
    );
    const made = await makeCandidates(lab, analysis.id, count);
    for (const [i, id] of made.entries()) {
      await execute(
        'INSERT INTO candidate_truths (candidate_id, lab_id, analysis_id, true_event) VALUES ($1, $2, $3, $4)',
        [id, labId, analysis.id, i % 2 === 0],
      );
    }
    return made;
  }
  const queue = async (reader = readers[0]) =>
    (await callJson<views.ReviewQueueView>('GET', `/api/v1/analyses/${analysisId}/review-queue`, reader))
      .body;
  const mix = (known: number) =>
    models().Campaign.update({ knownCandidates: known }, { where: { id: lab.campaignId } });

  it('stand unmarked among the others of the same scale, as many as the campaign asks for, half of them events', async () => {
    await makeSet(1, 6);
    const known = await rehearse(12);
    const { conditions } = (await models().Analysis.findByPk(analysisId))!;
    await rehearse(12, { ...conditions, pixelSize_m: 3e-6 });
    expect(await queue()).toMatchObject({ known: 0, items: { length: 6 } });
    await mix(4);
    const { known: told, items } = await queue();
    expect([told, items.length]).toEqual([4, 10]);
    const mixed = items.filter(({ id }) => !ids.includes(id));
    expect(mixed.map(({ id }) => known.indexOf(id) % 2).sort()).toEqual([0, 0, 1, 1]);
    expect(new Set(items.map((item) => Object.keys(item).sort().join())).size).toBe(1);
    expect(items.every(({ waits }) => waits)).toBe(true);
    expect((await queue()).items).toEqual(items);
    const others = (await queue(readers[1])).items.map(({ id }) => id);
    expect([...others].sort()).not.toEqual(items.map(({ id }) => id).sort());
  });

  it('measure a reader apart, and nothing follows from them: no result, no other number, no mail, no disagreement', async () => {
    await makeSet(1, 2);
    const made = await rehearse(12);
    await mix(12);
    const before = (await callJson<ListView<views.ReaderView>>('GET', '/api/v1/readers', PI())).body.items;
    const numbers = (items: views.ReaderView[], reader: string) => {
      const { known, ...rest } = items.find((item) => item.reader.id === reader)!;
      return { known, rest };
    };
    const mixed = (await queue()).items.filter(({ id }) => !ids.includes(id)).map(({ id }) => id);
    const truth = new Map(
      (
        await selectRows<{ id: string; yes: boolean }>(
          'SELECT candidate_id AS id, true_event AS yes FROM candidate_truths WHERE candidate_id = ANY($1::uuid[])',
          [mixed],
        )
      ).map(({ id, yes }) => [id, yes]),
    );
    const [wrong, unsure] = [mixed.find((id) => truth.get(id)), mixed.find((id) => !truth.get(id))];
    for (const id of mixed) {
      const said = id === wrong ? 'no' : id === unsure ? 'cannot-tell' : truth.get(id) ? 'yes' : 'no';
      expect((await put(id, readers[0], said, 1)).status).toBe(200);
      // Another reader who says otherwise makes no disagreement of it.
      if (made.includes(id)) await put(id, readers[1], said === 'yes' ? 'no' : 'yes', 1);
    }
    const after = (await callJson<ListView<views.ReaderView>>('GET', '/api/v1/readers', PI())).body.items;
    const [was, is] = [before, after].map((items) => numbers(items, readers[0].userId));
    expect(is.rest).toEqual(was.rest);
    expect(is.known).toEqual({ events: 6, eventsYes: 5, others: 6, othersNo: 5, cannotTell: 1 });
    expect(await column()).toEqual(['', '']);
    const { body } = await callJson<ListView<views.DisagreementView>>('GET', '/api/v1/disagreements', PI());
    expect(body.items.filter(({ candidateId }) => truth.has(candidateId))).toEqual([]);
    const mails = await selectRows(
      `SELECT id FROM mails m JOIN candidate_truths t ON t.analysis_id::text = m.facts->>'analysisId'`,
    );
    expect(mails).toEqual([]);
    const own = await callJson<ListView<views.ReaderView>>('GET', '/api/v1/readers', readers[0]);
    expect(own.body.items[0].known).toMatchObject({ events: 6 });
  });
});
