import { describe, expect, it } from 'vitest';
import { packagesAreCurrent } from '@/scripts/platform/ensure-packages.mjs';

const wanted = {
  packages: {
    '': { version: '0.1.0' },
    'node_modules/a': { version: '1.0.0' },
    'node_modules/b': { version: '2.0.0', dev: true },
    'node_modules/c': { version: '3.0.0', optional: true },
  },
};
const all = { 'node_modules/a': { version: '1.0.0' }, 'node_modules/b': { version: '2.0.0' } };

describe('whether packages have to be installed', () => {
  it('not when all are there; a package of another system may be absent', () => {
    expect(packagesAreCurrent(wanted, { packages: all }, { withDev: true })).toBe(true);
  });

  it('yes after an installation that did not come to its end', () => {
    expect(packagesAreCurrent(wanted, null, { withDev: false })).toBe(false);
  });

  it('yes when the lock file names another version, also of an optional package that is there', () => {
    const old = { ...all, 'node_modules/a': { version: '0.9.0' } };
    expect(packagesAreCurrent(wanted, { packages: old }, { withDev: false })).toBe(false);
    const oldOptional = { ...all, 'node_modules/c': { version: '2.9.0' } };
    expect(packagesAreCurrent(wanted, { packages: oldOptional }, { withDev: false })).toBe(false);
  });

  it('packages of tests are asked for by tests only', () => {
    const installed = { packages: { 'node_modules/a': { version: '1.0.0' } } };
    expect(packagesAreCurrent(wanted, installed, { withDev: false })).toBe(true);
    expect(packagesAreCurrent(wanted, installed, { withDev: true })).toBe(false);
  });
});
