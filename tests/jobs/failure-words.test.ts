import { expect, test } from 'vitest';
import { ComputeError } from '@/jobs/compute/compute-error';
import { FinalFailure } from '@/jobs/final-failure';
import { reasonOf } from '@/jobs/run-claim';

const full = 'ENOSPC: no space left on device, write';

test.each([new Error(full), new ComputeError('FAULT', full)])(
  'a full disk is told as such, wherever it was met',
  (cause) => {
    expect(reasonOf(cause)).toEqual({
      code: 'STORAGE_FULL',
      detail: 'The disk of the data folder is full. Free some room, then run it again.',
      final: false,
    });
  },
);

test('other failures keep their own words, and only those that trying again can’t mend are final', () => {
  expect(reasonOf(new ComputeError('TIMEOUT', 'Too slow.'))).toEqual({ code: 'TIMEOUT', detail: 'Too slow.', final: false }); // prettier-ignore
  expect(reasonOf(new ComputeError('RECIPE', 'Too long a step.'))).toMatchObject({ code: 'PARAM_RANGE', final: true }); // prettier-ignore
  expect(reasonOf(new FinalFailure('ADDRESS', 'No address.'))).toEqual({ code: 'ADDRESS', detail: 'No address.', final: true }); // prettier-ignore
  expect(reasonOf('odd')).toEqual({ code: 'FAULT', detail: 'odd', final: false });
});
