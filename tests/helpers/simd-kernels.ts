import { loadSimdKernels } from '@/jobs/compute/load-kernels';
import type { Kernels } from '@/tracking/kernels/kernels';
import { createSimdKernels } from '@/tracking/kernels/simd-kernels';

/** The compiled kernels; a machine that can't run them fails the test instead of testing nothing. */
export function simdKernels(): Kernels {
  const instantiate = loadSimdKernels();
  if (!instantiate) throw new Error('This machine has no compiled kernels to test.');
  return createSimdKernels(instantiate);
}
