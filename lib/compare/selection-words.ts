import { DISPLAY_UNITS } from '../format/unit';
import { countOf } from '../format/count';

type Filters = Readonly<Record<string, string | undefined>>;

/** Ranges of a selection as they are typed: names in the address, unit on the screen. */
export const RANGE_FIELDS = [
  { label: 'T', from: 'temperatureFrom_K', to: 'temperatureTo_K', unit: 'K', siPerUnit: 1 },
  { label: 'q', from: 'heatFluxFrom_W_m2', to: 'heatFluxTo_W_m2', ...DISPLAY_UNITS.heatFlux },
  { label: 'v_ns', from: 'vnsFrom_m_s', to: 'vnsTo_m_s', ...DISPLAY_UNITS.velocity },
] as const;

export const DRIVE_WORDS: Record<string, string> = {
  counterflow: 'counterflow',
  coflow: 'co-flow',
  'towed-grid': 'towed grid',
  'oscillating-grid': 'oscillating grid',
  none: 'no drive',
};

/** A number of an address in the unit of the screen; no more digits than a rounding step leaves. */
export const shownBound = (text: string | undefined, siPerUnit: number): string =>
  text ? String(Number((Number(text) / siPerUnit).toPrecision(10))) : '';

/** What was typed as it stands in an address; as it is where it is no number, so that the server can say so. */
export function typedBound(text: string, siPerUnit: number): string {
  const tidy = text.trim().replace(',', '.');
  const value = Number(tidy);
  return tidy === '' || !Number.isFinite(value) ? tidy : String(Number((value * siPerUnit).toPrecision(10)));
}

/** A selection in words: `2 campaigns, 1.6 to 1.9 K, counterflow, signed off`; `everything` for none. */
export function selectionWords(filters: Filters): string {
  const listed = (name: string) => filters[name]?.split(',').filter(Boolean) ?? [];
  const campaigns = listed('campaigns');
  const parts = campaigns.length > 0 ? [countOf(campaigns.length, 'campaign')] : [];
  for (const { label, from, to, unit, siPerUnit } of RANGE_FIELDS) {
    const [low, high] = [shownBound(filters[from], siPerUnit), shownBound(filters[to], siPerUnit)];
    const name = label === 'T' ? '' : `${label} `;
    if (low && high) parts.push(`${name}${low} to ${high} ${unit}`);
    else if (low) parts.push(`${name}from ${low} ${unit}`);
    else if (high) parts.push(`${name}up to ${high} ${unit}`);
  }
  const drives = listed('drives').map((drive) => DRIVE_WORDS[drive] ?? drive);
  if (drives.length > 0) parts.push(drives.join(' or '));
  const tags = listed('tags');
  if (tags.length > 0) parts.push(`tagged ${tags.join(' or ')}`);
  if (filters.signedOff) parts.push(filters.signedOff === 'yes' ? 'signed off' : 'not signed off');
  return parts.length > 0 ? parts.join(', ') : 'everything';
}
