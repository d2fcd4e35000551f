import { describe, expect, it } from 'vitest';
import { bytesParts, formatBytes, formatBytesOf } from '@/lib/format/bytes';
import { countOf, formatCount } from '@/lib/format/count';
import { formatDuration, formatTimeLeft } from '@/lib/format/duration';
import { formatClock, formatDay, formatMoment } from '@/lib/format/time';
import { DISPLAY_UNITS, unitPieces } from '@/lib/format/unit';

describe('bytes', () => {
  // Powers of 1000: SI prefixes (BIPM SI brochure, 9th edition, table 7).
  it('uses SI prefixes and never shows 1000 of a unit', () => {
    expect(formatBytes(0)).toBe('0 B');
    expect(formatBytes(999)).toBe('999 B');
    expect(formatBytes(1000)).toBe('1.00 kB');
    expect(formatBytes(999_499)).toBe('999 kB');
    expect(formatBytes(999_500)).toBe('1.00 MB');
    expect(formatBytes(25.4e9)).toBe('25.4 GB');
    expect(bytesParts(-1)).toBeNull();
    expect(formatBytes(null)).toBe('');
  });

  it('never claims that all is sent while a byte is missing', () => {
    expect(formatBytesOf(7.7e9, 24.6e9)).toBe('7.7 of 24.6 GB');
    expect(formatBytesOf(24.6e9 - 1, 24.6e9)).toBe('24.5 of 24.6 GB');
    expect(formatBytesOf(24.6e9, 24.6e9)).toBe('24.6 of 24.6 GB');
  });
});

describe('counts', () => {
  it('groups thousands and picks the plural', () => {
    expect(formatCount(20_000)).toBe('20\u2009000');
    expect(formatCount(NaN)).toBe('');
    expect(countOf(1, 'frame')).toBe('1 frame');
    expect(countOf(0, 'analysis', 'analyses')).toBe('0 analyses');
  });
});

describe('durations', () => {
  it('uses at most two units and carries rounding into the larger one', () => {
    expect(formatDuration(0.84)).toBe('0.8 s');
    expect(formatDuration(59.6)).toBe('1 min');
    expect(formatDuration(200)).toBe('3 min 20 s');
    expect(formatDuration(3599)).toBe('1 h');
    expect(formatDuration(11_520)).toBe('3 h 12 min');
    expect(formatDuration(86_399)).toBe('1 d');
    expect(formatDuration(-1)).toBe('');
  });

  it('says what is left as a guess', () => {
    expect(formatTimeLeft(30)).toBe('less than a minute');
    expect(formatTimeLeft(1230)).toBe('about 20 min');
    expect(formatTimeLeft(undefined)).toBe('');
  });
});

describe('moments', () => {
  const at = '2025-03-03T08:41:00Z';
  // Zones: IANA tz database; Berlin is UTC+1 in early March, UTC+2 in July, New York UTC-5.
  it('shows a stored UTC time in the zone asked for and names that zone', () => {
    expect(formatMoment(at)).toBe('3 Mar 2025, 08:41 UTC');
    expect(formatMoment(at, { zone: 'Europe/Berlin' })).toMatch(/^3 Mar 2025, 09:41 (CET|GMT\+1)$/);
    expect(formatMoment('2025-07-03T08:41:00Z', { zone: 'Europe/Berlin' })).toMatch(/10:41 (CEST|GMT\+2)$/);
    expect(formatDay('2025-03-03T02:00:00Z', 'America/New_York')).toBe('2 Mar 2025');
  });

  it('leaves out the day only when the moment is of today in that zone', () => {
    expect(formatMoment(at, { now: '2025-03-03T22:00:00Z' })).toBe('08:41 UTC');
    expect(formatMoment(at, { now: '2025-03-04T00:10:00Z' })).toBe('3 Mar 2025, 08:41 UTC');
  });

  it('falls back to UTC for an unknown zone and to nothing for what is no time', () => {
    expect(formatMoment(at, { zone: 'Mars/Olympus' })).toBe('3 Mar 2025, 08:41 UTC');
    expect(formatMoment('yesterday')).toBe('');
    expect(formatClock(at)).toBe('08:41');
  });
});

describe('units', () => {
  it('raises exponents with a real minus', () => {
    expect(unitPieces('10^8 m^-2')).toEqual([
      { text: '10', raised: false },
      { text: '8', raised: true },
      { text: ' m', raised: false },
      { text: '\u22122', raised: true },
    ]);
    expect(unitPieces('mm/s')).toEqual([{ text: 'mm/s', raised: false }]);
  });

  // 1 mW/cm2 = 1e-3 W / 1e-4 m2 = 10 W/m2; 1 mm^-2 = 1e6 m^-2.
  it('converts by exact powers of ten', () => {
    expect(DISPLAY_UNITS.heatFlux.siPerUnit).toBe(10);
    expect(DISPLAY_UNITS.perArea.siPerUnit).toBe(1e6);
  });
});
