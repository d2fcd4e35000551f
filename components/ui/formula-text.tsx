import { Fragment } from 'react';

/** Words in which `v_ns` stands for a letter with a subscript: `v_n = q/(ρST)` in type. */
export function FormulaText({ children }: { children: string }) {
  const pieces = children.split(/([A-Za-zρ]_[A-Za-z0-9]+)/);
  return (
    <>
      {pieces.map((piece, index) => {
        if (index % 2 === 0) return <Fragment key={index}>{piece}</Fragment>;
        const [letter, sub] = piece.split('_');
        return (
          <span key={index} className="whitespace-nowrap">
            <i>{letter}</i>
            <sub>{sub}</sub>
          </span>
        );
      })}
    </>
  );
}
