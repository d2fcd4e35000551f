/** Visits every value of a list, in any order that is the same each time. */
export type EachValue = (visit: (value: number) => void) => void;

const DIGIT_BITS = 16;
const DIGITS = 4;
const SIGN = 0x80000000;
/** Lists of up to so many values are sorted: 8 megabytes. */
const HELD_MOST = 1 << 20;

/**
 * The values that would stand at given places of the sorted list, exactly, without holding a long list.
 * Order is that of typed arrays: -0 before 0, NaN last.
 *
 * @param places from 0. @throws RangeError for a place beyond the list.
 */
export function orderStatistics(each: EachValue, places: readonly number[]): number[] {
  const held = heldValues(each);
  if (!held) return selected(each, places);
  held.sort();
  return places.map((place) => {
    if (place >= held.length) throw beyond(place, held.length);
    return held[place];
  });
}

/** The values of a list that is short; null for a long one. */
function heldValues(each: EachValue): Float64Array | null {
  let values = new Float64Array(1024);
  let count = 0;
  each((value) => {
    if (count === values.length && count < HELD_MOST) {
      const more = new Float64Array(2 * count);
      more.set(values);
      values = more;
    }
    if (count < values.length) values[count] = value;
    count++;
  });
  return count <= values.length ? values.subarray(0, count) : null;
}

const beyond = (place: number, count: number) =>
  new RangeError(`There is no place ${place} among ${count} values.`);

/**
 * By radix selection: the list is gone through four times, each time counting 16 further bits of the values near the
 * places.
 */
function selected(each: EachValue, places: readonly number[]): number[] {
  const number = new Float64Array(1);
  const halves = new Uint32Array(number.buffer);
  // Which half holds the sign depends on the machine.
  number[0] = -1;
  const high = halves[1] === 0xbff00000 ? 1 : 0;
  const low = 1 - high;
  let groups: Group[] = [{ highKey: 0, lowKey: 0, wanted: places.map((place, at) => ({ place, at })) }];
  for (let digit = 0; digit < DIGITS; digit++) {
    const counts = groups.map(() => new Uint32Array(1 << DIGIT_BITS));
    each((value) => {
      number[0] = value;
      // Bits in an order that is that of the numbers: negative ones are turned round.
      const isNegative = halves[high] >= SIGN;
      const h = (isNegative ? ~halves[high] : halves[high] | SIGN) >>> 0;
      const l = (isNegative ? ~halves[low] : halves[low]) >>> 0;
      for (let g = 0; g < groups.length; g++) {
        const { highKey, lowKey } = groups[g];
        if (digit === 0) counts[g][h >>> DIGIT_BITS]++;
        else if (digit === 1) {
          if (h >>> DIGIT_BITS === highKey >>> DIGIT_BITS) counts[g][h & 0xffff]++;
        } else if (h !== highKey) continue;
        else if (digit === 2) counts[g][l >>> DIGIT_BITS]++;
        else if (l >>> DIGIT_BITS === lowKey >>> DIGIT_BITS) counts[g][l & 0xffff]++;
      }
    });
    groups = groups.flatMap((group, g) => narrowed(group, counts[g], digit));
  }
  const found = new Array<number>(places.length);
  for (const { highKey, lowKey, wanted } of groups) {
    const isNegative = highKey < SIGN;
    halves[high] = isNegative ? ~highKey : highKey & ~SIGN;
    halves[low] = isNegative ? ~lowKey : lowKey;
    for (const { at } of wanted) found[at] = number[0];
  }
  return found;
}

/** Values that share their first bits, and the places wanted among them. */
interface Group {
  highKey: number;
  lowKey: number;
  wanted: { place: number; at: number }[];
}

function narrowed({ highKey, lowKey, wanted }: Group, counts: Uint32Array, digit: number): Group[] {
  const groups = new Map<number, Group>();
  for (const { place, at } of wanted) {
    let below = 0;
    let bin = 0;
    while (bin < counts.length && below + counts[bin] <= place) below += counts[bin++];
    if (bin === counts.length) throw beyond(place, below);
    let group = groups.get(bin);
    if (!group) {
      const isHigh = digit < DIGITS / 2;
      const shifted = digit % 2 === 0 ? (bin << DIGIT_BITS) >>> 0 : bin;
      group = {
        highKey: isHigh ? (highKey | shifted) >>> 0 : highKey,
        lowKey: isHigh ? lowKey : (lowKey | shifted) >>> 0,
        wanted: [],
      };
      groups.set(bin, group);
    }
    group.wanted.push({ place: place - below, at });
  }
  return [...groups.values()];
}
