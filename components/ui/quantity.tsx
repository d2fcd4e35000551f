import { Fragment, type ReactNode } from 'react';
import { formatCount } from '@/lib/format/count';
import { formatQuantity, type QuantityInput } from '@/lib/format/quantity';
import { unitPieces } from '@/lib/format/unit';

/** A unit or formula in type, exponents raised: `<Unit>{'10^8 m^-2'}</Unit>`. */
export function Unit({ children }: { children: string }) {
  return (
    <>
      {unitPieces(children).map((piece, index) =>
        piece.raised ? <sup key={index}>{piece.text}</sup> : <Fragment key={index}>{piece.text}</Fragment>,
      )}
    </>
  );
}

/** A whole number that doesn't break at its thin spaces. */
export function Count({ value }: { value: number | null | undefined }) {
  return <span className="whitespace-nowrap tabular-nums">{formatCount(value)}</span>;
}

/** A symbol set as in print: letter in italics, a word as upright subscript. `<QuantitySymbol letter="v" sub="ns" />` */
export function QuantitySymbol({
  letter,
  sub,
  children,
}: {
  letter: string;
  sub?: string;
  children?: ReactNode;
}) {
  return (
    <span className="whitespace-nowrap">
      <i>{letter}</i>
      {sub ? <sub className="font-serif">{sub}</sub> : null}
      {children}
    </span>
  );
}

interface QuantityProps extends QuantityInput {
  /** Printed unit with `^` for exponents; leave out where the column head has it. */
  unit?: string;
  /** What stands for an unknown value, beside the words that screen readers get. */
  unknown?: ReactNode;
  className?: string;
}

/**
 * A number as value, uncertainty and unit, rounded by the product's rule. Values are SI; `siPerUnit`
 * converts: `<Quantity value={0.0279} uncertainty={0.0015} {...DISPLAY_UNITS.velocity} />`.
 * Unknown: an empty place that says "not measured" to screen readers.
 */
export function Quantity({ unit, unknown = null, className = '', ...input }: QuantityProps) {
  const text = formatQuantity(input);
  if (!text) {
    return (
      <span className={className}>
        <span className="sr-only">not measured</span>
        <span aria-hidden="true">{unknown}</span>
      </span>
    );
  }
  const power = text.exponent === 0 ? '' : `×10^${text.exponent}`;
  const tail = [power, unit].filter(Boolean).join(' ');
  return (
    <span className={`whitespace-nowrap tabular-nums ${className}`}>
      {text.value}
      {text.uncertainty ? (
        <>
          <span className="px-[.18em] text-ink-2">±</span>
          {text.uncertainty}
        </>
      ) : null}
      {text.range ? ` (${text.range.low} to ${text.range.high})` : null}
      {tail ? (
        <span className="ml-[.22em] text-ink-2">
          <Unit>{tail}</Unit>
        </span>
      ) : null}
    </span>
  );
}

interface QuantityRowProps extends QuantityProps {
  name: ReactNode;
  symbol?: ReactNode;
  /** Marks the row that a warning is tied to. The tie starts at its right end. */
  tie?: string;
  tone?: 'warning' | 'caution';
  /** A line under the row, e.g. that a constant is unverified, or the words of its warning on narrow screens. */
  note?: ReactNode;
}

/** One derived quantity: name, symbol, value, unit, aligned with its neighbours. Put rows in a `<dl>`. */
export function QuantityRow({ name, symbol, tie, tone = 'warning', note, unit, ...input }: QuantityRowProps) {
  const edge = !tie
    ? 'border-b border-line'
    : tone === 'warning'
      ? 'border-b-[1.5px] border-amber'
      : 'border-b-[1.5px] border-red';
  return (
    <div
      data-tie-from={tie}
      data-tie-tone={tie ? tone : undefined}
      className={`grid grid-cols-[minmax(0,1fr)_56px_minmax(84px,auto)_66px] items-baseline gap-x-[9px] py-1 hand:grid-cols-[minmax(0,1fr)_78px_108px_78px] ${edge}`}
    >
      <dt>{name}</dt>
      <dd className="text-right font-serif text-[15px]">{symbol}</dd>
      <dd className={`text-right ${tie ? 'font-strong' : ''}`}>
        <Quantity {...input} />
      </dd>
      <dd className="whitespace-nowrap text-ink-2">{unit ? <Unit>{unit}</Unit> : null}</dd>
      {note ? <dd className="col-span-full text-small text-ink-3">{note}</dd> : null}
    </div>
  );
}
