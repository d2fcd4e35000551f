/** `system`: as the person's computer says. */
export type Theme = 'light' | 'dark' | 'system';

export const THEME_COOKIE = 'theme';
const YEAR_S = 365 * 24 * 3600;

/** The theme that a cookie's value stands for; anything unknown is `system`. */
export function themeFromCookie(value: string | undefined): Theme {
  return value === 'light' || value === 'dark' ? value : 'system';
}

/** The cookie that keeps a choice for a year; `system` removes it. Holds nothing about the person. */
export function themeCookie(theme: Theme): string {
  const life = theme === 'system' ? 0 : YEAR_S;
  return `${THEME_COOKIE}=${theme === 'system' ? '' : theme}; Path=/; Max-Age=${life}; SameSite=Lax`;
}
