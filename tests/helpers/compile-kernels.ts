import { ensureKernels } from '@/scripts/platform/kernels.mjs';

/** The WebAssembly kernels as the product would build them, before any test looks for them. */
export async function setup(): Promise<void> {
  await ensureKernels({ step: (_doing, work) => work() });
}
