import { unitPieces } from '@/lib/format/unit';

/** Name of an axis: a symbol in italics with an upright subscript, words, a unit with `^` exponents. */
export interface AxisTitle {
  symbol?: string;
  sub?: string;
  /** Raised after the symbol: δ². */
  power?: string;
  words?: string;
  unit: string;
}

interface SvgTextProps {
  x: number;
  y: number;
  anchor?: 'start' | 'middle' | 'end';
}

/** The title as one line of SVG text. */
export function AxisTitleText({ title, x, y, anchor = 'start' }: SvgTextProps & { title: AxisTitle }) {
  return (
    <text x={x} y={y} textAnchor={anchor} fill="var(--ink)" fontSize="13">
      {title.symbol ? (
        <tspan fontFamily="var(--serif)" fontStyle="italic" fontSize="14">
          {title.symbol}
        </tspan>
      ) : null}
      {title.sub ? <Shifted text={title.sub} dy={3} /> : null}
      {title.power ? <Shifted text={title.power} dy={-5} /> : null}
      {title.words ? `${title.symbol ? ' ' : ''}${title.words}` : ''}
      {title.unit ? ', ' : ''}
      {unitPieces(title.unit).map((piece, index) =>
        piece.raised ? (
          <Shifted key={index} text={piece.text} dy={-5} />
        ) : (
          <tspan key={index}>{piece.text}</tspan>
        ),
      )}
    </text>
  );
}

/** Raised or lowered text that gives the line back its height. */
function Shifted({ text, dy }: { text: string; dy: number }) {
  return (
    <>
      <tspan dy={dy} fontSize="10">
        {text}
      </tspan>
      <tspan dy={-dy}>{'\u200b'}</tspan>
    </>
  );
}

/** A number on an axis: decades of a log axis as powers of ten, others plain with a real minus. */
export function TickText({
  value,
  log,
  x,
  y,
  anchor = 'middle',
}: SvgTextProps & { value: number; log: boolean }) {
  return (
    <text x={x} y={y} textAnchor={anchor} fill="var(--ink-2)" fontSize="12">
      {log ? (
        <>
          10
          <tspan dy="-5" fontSize="9.5">
            {String(Math.round(Math.log10(value))).replace('-', '\u2212')}
          </tspan>
        </>
      ) : (
        tickNumber(value)
      )}
    </text>
  );
}

/** A tick's number: thin spaces from 1 000 on, exponent form outside 1e-4 ... 1e6. */
export function tickNumber(value: number): string {
  const size = Math.abs(value);
  const plain = size === 0 || (size >= 1e-4 && size < 1e6);
  const text = plain ? String(value) : value.toExponential();
  const grouped = plain && size >= 1e3 ? text.replace(/\B(?=(\d{3})+$)/g, '\u2009') : text;
  return grouped.replaceAll('-', '\u2212').replace('e+', 'e');
}
