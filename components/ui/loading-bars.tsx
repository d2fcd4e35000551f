/**
 * Bars at the text's place while it loads; nothing for the first 400 ms, so that quick answers
 * don't flicker. `widths` are the lengths of the lines in percent.
 */
export function LoadingBars({
  label = 'Loading',
  widths = [72, 54, 63],
}: {
  label?: string;
  widths?: readonly number[];
}) {
  return (
    <div role="status" className="loading-bars">
      <span className="sr-only">{label}</span>
      {widths.map((width, index) => (
        <div
          key={index}
          aria-hidden="true"
          className="my-[6px] h-2 rounded-bead bg-sunk"
          style={{ width: `${width}%` }}
        />
      ))}
    </div>
  );
}
