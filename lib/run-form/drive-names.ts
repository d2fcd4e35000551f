import type { Drive } from '@/tracking/flow/run-conditions';

/** Drives in words. */
export const DRIVE_NAMES: Record<Drive, string> = {
  counterflow: 'thermal counterflow',
  coflow: 'co-flow',
  'towed-grid': 'towed grid',
  'oscillating-grid': 'oscillating grid',
  none: 'none',
};
