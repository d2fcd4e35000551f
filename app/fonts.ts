import localFont from 'next/font/local';

// One family per subset: the browser fetches a Greek or a symbol file only where a page needs it, and
// no metric-adjusted fallback may stand between a subset and the next.
const sansLatin = localFont({
  src: '../fonts/source-sans-3-latin-wght-normal.woff2',
  weight: '200 900',
  display: 'swap',
  variable: '--font-sans-latin',
  adjustFontFallback: false,
  declarations: [
    {
      prop: 'unicode-range',
      value: 'U+0000-00FF,U+0131,U+0152-0153,U+02C6,U+02DA,U+02DC,U+2000-206F,U+20AC,U+2122,U+2212',
    },
  ],
});

const sansGreek = localFont({
  src: '../fonts/source-sans-3-greek-wght-normal.woff2',
  weight: '200 900',
  display: 'swap',
  variable: '--font-sans-greek',
  preload: false,
  adjustFontFallback: false,
  declarations: [{ prop: 'unicode-range', value: 'U+0370-03FF' }],
});

const serifLatin = localFont({
  src: [
    { path: '../fonts/stix-two-text-latin-wght-normal.woff2', weight: '400 700', style: 'normal' },
    { path: '../fonts/stix-two-text-latin-wght-italic.woff2', weight: '400 700', style: 'italic' },
  ],
  display: 'swap',
  variable: '--font-serif-latin',
  adjustFontFallback: false,
  declarations: [
    {
      prop: 'unicode-range',
      value: 'U+0000-00FF,U+0131,U+0152-0153,U+02C6,U+02DA,U+02DC,U+2000-206F,U+20AC,U+2113,U+2122,U+2212',
    },
  ],
});

const serifGreek = localFont({
  src: [
    { path: '../fonts/stix-two-text-greek-wght-normal.woff2', weight: '400 700', style: 'normal' },
    { path: '../fonts/stix-two-text-greek-wght-italic.woff2', weight: '400 700', style: 'italic' },
  ],
  display: 'swap',
  variable: '--font-serif-greek',
  preload: false,
  adjustFontFallback: false,
  declarations: [{ prop: 'unicode-range', value: 'U+0370-03FF' }],
});

const symbols = localFont({
  src: '../fonts/beadline-symbols.woff2',
  display: 'swap',
  variable: '--font-symbols',
  preload: false,
  adjustFontFallback: false,
});

/** Class names that set the font variables of `app/globals.css`; they belong on the html element. */
export const fontVariables = [sansLatin, sansGreek, serifLatin, serifGreek, symbols]
  .map((font) => font.variable)
  .join(' ');
