import { themeCookie, type Theme } from '@/lib/theme';

/** Sets the theme of this page at once and of later pages by a cookie. Browser only. */
export function applyTheme(theme: Theme): void {
  document.cookie = themeCookie(theme);
  if (theme === 'system') delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = theme;
}

/** The theme that the page was drawn with. Browser only. */
export function currentTheme(): Theme {
  const theme = document.documentElement.dataset.theme;
  return theme === 'light' || theme === 'dark' ? theme : 'system';
}
