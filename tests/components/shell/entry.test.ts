import { describe, expect, it } from 'vitest';
import { currentPlace } from '@/components/shell/places';
import { safeDestination } from '@/components/sign-in/destination';
import { signInProblem } from '@/components/sign-in/sign-in-by-password';
import { themeCookie, themeFromCookie } from '@/lib/theme';

describe('after signing in', () => {
  it('a path of this site is followed', () => {
    expect(safeDestination('/campaigns/01?sort=-name')).toBe('/campaigns/01?sort=-name');
  });

  // Forms by which browsers read another origin: WHATWG URL standard, relative and relative-slash states.
  it.each([
    'https://elsewhere.test',
    '//elsewhere.test',
    '/\\elsewhere.test',
    '/\t/elsewhere.test',
    'javascript:alert(1)',
    '',
    undefined,
    ['/a'],
  ])('an address of another site is never followed: %j', (wanted) => {
    expect(safeDestination(wanted)).toBe('/');
  });

  it('does not lead back to the sign-in page', () => {
    expect(safeDestination('/sign-in?next=/')).toBe('/');
  });
});

describe('sign-in answers', () => {
  const answer = (status: number, error: string | null) => ({ ok: status < 400, status, error });

  it('do not tell a wrong e-mail from a wrong password', () => {
    expect(signInProblem(answer(401, 'CredentialsSignin'))?.what).toBe(
      'E-mail and password do not belong together.',
    );
  });

  it('tell a locked account and a lost server from a wrong password', () => {
    expect(signInProblem(answer(429, null))?.what).toMatch(/^Too many tries/);
    expect(signInProblem(answer(503, 'x'))?.what).toMatch(/did not answer/);
    expect(signInProblem(undefined)?.what).toMatch(/did not answer/);
    expect(signInProblem(answer(200, null))).toBeNull();
  });
});

describe('places of the head', () => {
  const places = [
    { href: '/', label: 'Overview' },
    { href: '/campaigns', label: 'Campaigns' },
    { href: '/lab', label: 'Lab' },
  ];

  it('mark the place that the address is under, the overview only for itself', () => {
    expect(currentPlace(places, '/')?.label).toBe('Overview');
    expect(currentPlace(places, '/campaigns/01')?.label).toBe('Campaigns');
    expect(currentPlace(places, '/laboratory')).toBeNull();
    expect(currentPlace(places, '/account')).toBeNull();
  });
});

describe('theme', () => {
  it('is read back from its own cookie, and anything else means the system', () => {
    for (const theme of ['light', 'dark', 'system'] as const) {
      const value = themeCookie(theme).split(';')[0].split('=')[1];
      expect(themeFromCookie(value)).toBe(theme);
    }
    expect(themeFromCookie('"><script>')).toBe('system');
    expect(themeCookie('system')).toContain('Max-Age=0');
  });
});
