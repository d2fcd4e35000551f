/** Populations and events as the same strokes wherever they appear: legend, image, plot, print. */
export type Stroke = 'trapped' | 'free' | 'undecided' | 'event' | 'marked line';

/** What people drew is white on images: colours are for what the machine tells apart. */
export const MARK_COLOUR = '#eef2f3';
/** Long and short strokes in turn: no track is drawn so. */
export const MARK_DASHES_PX = [11, 4, 2, 4];
export const MARK_PX = 1.4;

/** A stroke in a legend. On a dark chip beside images, plain beside plots. */
export function StrokeSample({ stroke, onWell = false }: { stroke: Stroke; onWell?: boolean }) {
  const colour = stroke === 'marked line' ? MARK_COLOUR : `var(--${onWell ? 'well-' : ''}${stroke})`;
  return (
    <svg
      width="34"
      height="12"
      viewBox="0 0 34 12"
      aria-hidden="true"
      className={`shrink-0 ${onWell ? 'bg-well' : ''}`}
    >
      <Drawn stroke={stroke} colour={colour} />
    </svg>
  );
}

const WAVE = 'M3 6C8 3.6 12 4.6 17 6S27 8.4 31 6';

function Drawn({ stroke, colour }: { stroke: Stroke; colour: string }) {
  if (stroke === 'trapped') {
    return (
      <g fill={colour}>
        <path d={WAVE} fill="none" stroke={colour} />
        {[
          [3, 6],
          [10, 4.5],
          [17, 6],
          [24, 7.5],
          [31, 6],
        ].map(([x, y]) => (
          <circle key={x} cx={x} cy={y} r="2.1" />
        ))}
      </g>
    );
  }
  if (stroke === 'free') return <path d="M3 6.2C12 4 20 5.2 31 4.4V7.6C20 8 12 5 3 6.7Z" fill={colour} />;
  if (stroke === 'undecided') {
    return <path d={WAVE} fill="none" stroke={colour} strokeWidth="1.4" strokeDasharray="4 3.5" />;
  }
  if (stroke === 'marked line') {
    return (
      <g fill="none" stroke={colour} strokeWidth={MARK_PX}>
        <path d="M3 6H31" strokeDasharray={MARK_DASHES_PX.join(' ')} />
        <path d="M3 2V10M31 2V10" />
      </g>
    );
  }
  return (
    <path
      d="M12 1.6Q17 6 22 1.6M12 10.4Q17 6 22 10.4"
      fill="none"
      stroke={colour}
      strokeWidth="1.8"
      strokeLinecap="round"
    />
  );
}

/** A line of strokes with their words. */
export function StrokeLegend({
  strokes,
  onWell,
  note,
}: {
  strokes: readonly Stroke[];
  onWell?: boolean;
  note?: string;
}) {
  return (
    <div className="flex flex-wrap items-center gap-x-5 gap-y-[6px] text-note">
      {strokes.map((stroke) => (
        <span key={stroke} className="inline-flex items-center gap-2">
          <StrokeSample stroke={stroke} onWell={onWell} />
          {stroke}
        </span>
      ))}
      {note ? <span className="text-ink-2 hand:ml-auto">{note}</span> : null}
    </div>
  );
}
