import { kernelChoice } from '@/lib/env';
import type { Kernels } from '@/tracking/kernels/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { createSimdKernels } from '@/tracking/kernels/simd-kernels';
import { loadSimdKernels } from './load-kernels';

let chosen: Kernels | null = null;

/**
 * What this process computes frames with: the compiled kernels where they can run, unless
 * BEADLINE_KERNELS=plain asks for the others.
 */
export function kernelsOfThisProcess(): Kernels {
  chosen ??= chooseKernels();
  return chosen;
}

/** @param path the compiled kernels; by default those of the build. */
export function chooseKernels(path?: string): Kernels {
  const instantiate = kernelChoice() === 'plain' ? null : loadSimdKernels(path);
  return instantiate ? createSimdKernels(instantiate) : plainKernels;
}
