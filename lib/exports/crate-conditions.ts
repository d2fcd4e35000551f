import type { PlannedAnalysis } from './plan';
import type { Entity } from './crate-entity';

const UNITS: Record<string, string> = { m: 'm', s: 's', K: 'K', Pa: 'Pa', W: 'W', e: 'electron', px: 'px' };
const COMPOUND: [ending: string, unit: string][] = [
  ['_W_m2', 'W/m^2'],
  ['_kg_m3', 'kg/m^3'],
  ['_m_s', 'm/s'],
  ['_s_m2', 's/m^2'],
  ['_m2', 'm^-2'],
  ['Px', 'px'],
];

/** Unit that the end of a field's name says, as in `pixelSize_m`; empty for none. */
export function unitOfField(name: string): string {
  const compound = COMPOUND.find(([ending]) => name.endsWith(ending));
  if (compound) return compound[1];
  const match = /_([A-Za-z]+)$/.exec(name);
  return match ? (UNITS[match[1]] ?? '') : '';
}

/** Conditions and recipe as values with names and units, which the action took as its input. */
export function conditionEntities({ id, conditions, recipe }: PlannedAnalysis): Entity[] {
  const values = [...flat('condition', conditions), ...flat('recipe', recipe)];
  return values.map(([name, value]) => {
    const unitText = unitOfField(name);
    return {
      '@id': `#${id}-${encodeURIComponent(name)}`,
      '@type': 'PropertyValue',
      name,
      value,
      ...(unitText ? { unitText } : {}),
    };
  });
}

/** Known values of nested objects under names with points; lists as text. */
function flat(prefix: string, value: object): [name: string, value: number | string][] {
  return Object.entries(value)
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .flatMap(([key, one]): [string, number | string][] => {
      const name = `${prefix}.${key}`;
      if (one === null || one === undefined) return [];
      if (Array.isArray(one)) return [[name, JSON.stringify(one)]];
      if (typeof one === 'object') return flat(name, one as object);
      return [[name, typeof one === 'boolean' ? String(one) : (one as number | string)]];
    });
}
