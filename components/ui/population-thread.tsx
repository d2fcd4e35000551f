import { formatCount } from '@/lib/format/count';
import { Quantity } from './quantity';

export interface PopulationShare {
  population: 'trapped' | 'free' | 'undecided';
  tracks: number;
  /** Share of all tracks 0..1 and its half width. */
  share: number;
  uncertainty?: number | null;
}

/** Least width of a part, so that a rare population can still be seen and read. */
const PART_PERCENT_MIN = 16;

/** Widths in percent of the parts: in proportion, none below the least width; sum 100. */
export function partWidths(counts: readonly number[], leastPercent = PART_PERCENT_MIN): number[] {
  const total = counts.reduce((sum, count) => sum + count, 0);
  if (total === 0) return counts.map(() => 100 / counts.length);
  const wanted = counts.map((count) => (count / total) * 100);
  const raised = wanted.map((width) => Math.max(leastPercent, width));
  const spare = raised.reduce((sum, width) => sum + (width - leastPercent), 0);
  const room = 100 - leastPercent * counts.length;
  return raised.map((width) => leastPercent + (spare === 0 ? 0 : ((width - leastPercent) / spare) * room));
}

/** The populations of a recording as one thread of three strokes, lengths by their number of tracks. */
export function PopulationThread({ shares }: { shares: readonly PopulationShare[] }) {
  const widths = partWidths(shares.map((part) => part.tracks));
  return (
    <ul className="flex gap-[6px] pb-[2px] pt-[6px]">
      {shares.map((part, index) => (
        <li
          key={part.population}
          style={{ width: `${widths[index]}%` }}
          className="min-w-0 whitespace-nowrap"
        >
          <Part population={part.population} />
          {/* The last words stand under the thread's end and may reach back under its neighbour. */}
          <div className={index > 0 && index === shares.length - 1 ? 'flex flex-col items-end' : ''}>
            <div className="text-note">
              {part.population} <span className="font-strong">{formatCount(part.tracks)}</span>
            </div>
            <div className="text-small text-ink-2">
              <Quantity value={part.share} uncertainty={part.uncertainty} digits={part.share < 0.1 ? 1 : 2} />
              {index === 0 ? ' of tracks' : null}
            </div>
          </div>
        </li>
      ))}
    </ul>
  );
}

function Part({ population }: { population: PopulationShare['population'] }) {
  if (population === 'trapped') {
    return (
      <div aria-hidden="true" className="mb-[5px] h-[10px]">
        <svg width="100%" height="10" className="block">
          <defs>
            <pattern id="population-beads" width="9" height="10" patternUnits="userSpaceOnUse">
              <path d="M0 5H9" className="stroke-trapped" strokeWidth="1.5" />
              <circle cx="4.5" cy="5" r="3" className="fill-trapped" />
            </pattern>
          </defs>
          <rect width="100%" height="10" fill="url(#population-beads)" />
        </svg>
      </div>
    );
  }
  return (
    <svg
      width="100%"
      height="10"
      viewBox="0 0 100 10"
      preserveAspectRatio="none"
      aria-hidden="true"
      className="mb-[5px] block"
    >
      {population === 'free' ? (
        <path d="M0 5L100 1.5V8.5Z" className="fill-free" />
      ) : (
        <path
          d="M0 5H100"
          className="stroke-undecided"
          strokeWidth="1.8"
          strokeDasharray="5 4"
          vectorEffect="non-scaling-stroke"
        />
      )}
    </svg>
  );
}
