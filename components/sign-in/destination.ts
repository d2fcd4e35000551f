/**
 * Where to go after signing in: a path of this site from the address, the overview otherwise. An
 * address of another site, also one in disguise (`//other`, `/\other`), is never followed.
 */
export function safeDestination(wanted: string | string[] | undefined, home = '/'): string {
  if (typeof wanted !== 'string' || !/^\/(?![/\\])/.test(wanted)) return home;
  // Tabs and line ends are dropped by browsers, so "/<tab>/other" would read as "//other".
  if (/[\u0000-\u001f\\]/.test(wanted)) return home;
  return wanted.startsWith('/sign-in') ? home : wanted;
}
