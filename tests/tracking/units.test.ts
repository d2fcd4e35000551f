import { expect, test } from 'vitest';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

test('the quantum of circulation is h / m4', () => {
  // Papers print 9.97e-8 m^2/s (Stasiak et al., arXiv:2411.08942); h exact in SI, m4 from CODATA 2022.
  expectWithin(KAPPA_M2_S, 9.96929e-8, { abs: 1e-13 });
  expect(KAPPA_M2_S.toPrecision(3)).toBe('9.97e-8');
});
