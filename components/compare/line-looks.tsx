import { Unit } from '@/components/ui/quantity';

/** How curves of several runs or selections are told apart: by dash and colour together. */
export interface LineLook {
  stroke: string;
  dash?: string;
  widthPx: number;
}

const LOOKS: readonly LineLook[] = [
  { stroke: 'var(--ink)', widthPx: 1.6 },
  { stroke: 'var(--violet)', dash: '7 4', widthPx: 1.6 },
  { stroke: 'var(--green)', dash: '2 3', widthPx: 1.9 },
  { stroke: 'var(--ink)', dash: '10 3 2 3', widthPx: 1.4 },
  { stroke: 'var(--violet)', widthPx: 1.2 },
  { stroke: 'var(--green)', dash: '9 5', widthPx: 1.4 },
];

/** More curves than this can't be told apart in one plot. */
export const LINES_MOST = LOOKS.length;
export const lineLook = (index: number): LineLook => LOOKS[index % LOOKS.length];

/** A piece of each curve with its name, under the plot. */
export function LineLegend({ items }: { items: readonly { key: string; look: LineLook; name: string }[] }) {
  return (
    <ul className="flex flex-wrap gap-x-5 gap-y-1 pt-1 text-note">
      {items.map(({ key, look, name }) => (
        <li key={key} className="flex items-center gap-2">
          <svg viewBox="0 0 30 8" aria-hidden="true" className="h-2 w-[30px]">
            <path d="M0 4H30" stroke={look.stroke} strokeWidth={look.widthPx} strokeDasharray={look.dash} />
          </svg>
          <span>
            <Unit>{name}</Unit>
          </span>
        </li>
      ))}
    </ul>
  );
}
