/** A tie's two ends in the sheet's pixels: the row's right end, and the note's head. */
export interface TieEnds {
  fromX: number;
  fromY: number;
  toX: number;
  toY: number;
}

const BEND_PX = 8;
/** Where the tie turns up or down inside the gutter. */
const TURN_PX = 22;

/**
 * SVG path of a tie: right from the row, along the gutter with two rounded bends, right to the note.
 * Straight when the ends are closer in height than the two bends need.
 */
export function tiePath({ fromX, fromY, toX, toY }: TieEnds): string {
  const rise = toY - fromY;
  if (Math.abs(rise) < 2 * BEND_PX) return `M${fromX} ${fromY}L${toX} ${toY}`;
  const bend = Math.sign(rise) * BEND_PX;
  const x = fromX + TURN_PX;
  return (
    `M${fromX} ${fromY}H${x - BEND_PX}Q${x} ${fromY} ${x} ${fromY + bend}` +
    `V${toY - bend}Q${x} ${toY} ${x + BEND_PX} ${toY}H${toX}`
  );
}
