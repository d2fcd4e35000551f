import { useId, type ComponentPropsWithRef, type ReactNode } from 'react';
import { boxClasses, describedBy, FieldFrame, type FieldWords } from './field-frame';
import { Unit } from './quantity';

type FieldProps = FieldWords &
  Omit<ComponentPropsWithRef<'input'>, 'className'> & {
    /** Printed inside the box at its right; read with the label. `^` raises: `mW/cm^2`. */
    unit?: string;
    /** Columns and the like; goes on the outer element. */
    className?: string;
  };

/**
 * One line of text or a number. For numbers use `inputMode="decimal"` and read the text yourself:
 * an emptied number input must not turn into 0.
 */
export function Field({
  label,
  unit,
  help,
  error,
  warning,
  hideLabel,
  className,
  id,
  type = 'text',
  ...input
}: FieldProps) {
  const ownId = useId();
  const fieldId = id ?? ownId;
  const words = { label, help, error, warning, hideLabel };
  return (
    <FieldFrame id={fieldId} messageId={`${fieldId}-words`} className={className} {...words}>
      <span
        className={`flex h-10 items-center px-[9px] hand:h-control pointer-coarse:h-control-touch has-[:focus-visible]:outline-2 has-[:focus-visible]:outline-offset-1 has-[:focus-visible]:outline-violet has-[:disabled]:border-dashed has-[:disabled]:bg-transparent ${boxClasses(words)}`}
      >
        <input
          id={fieldId}
          type={type}
          className="w-full min-w-0 bg-transparent tabular-nums outline-none placeholder:text-ink-3 disabled:cursor-not-allowed disabled:text-ink-3"
          {...describedBy(words, `${fieldId}-words`)}
          {...input}
        />
        {unit ? (
          <span className="whitespace-nowrap pl-2 text-note text-ink-2">
            <Unit>{unit}</Unit>
          </span>
        ) : null}
      </span>
    </FieldFrame>
  );
}

type TextAreaProps = FieldWords &
  Omit<ComponentPropsWithRef<'textarea'>, 'className'> & { className?: string };

/** Text of several lines. */
export function TextArea({
  label,
  help,
  error,
  warning,
  hideLabel,
  className,
  id,
  rows = 3,
  ...area
}: TextAreaProps) {
  const ownId = useId();
  const fieldId = id ?? ownId;
  const words = { label, help, error, warning, hideLabel };
  return (
    <FieldFrame id={fieldId} messageId={`${fieldId}-words`} className={className} {...words}>
      <textarea
        id={fieldId}
        rows={rows}
        className={`min-h-16 w-full px-[9px] py-[5px] focus-visible:outline-offset-1 ${boxClasses(words)}`}
        {...describedBy(words, `${fieldId}-words`)}
        {...area}
      />
    </FieldFrame>
  );
}

/** A group of fields under a legend and a rule: four columns, two on narrow screens. */
export function FieldGroup({
  legend,
  note,
  children,
}: {
  legend: ReactNode;
  note?: ReactNode;
  children: ReactNode;
}) {
  return (
    <fieldset className="mb-[18px] min-w-0">
      <legend className="mb-[10px] flex w-full justify-between border-b border-line pb-[6px] text-note font-strong">
        {legend}
        {note ? <span className="font-text text-ink-3">{note}</span> : null}
      </legend>
      <div className="grid grid-cols-2 gap-x-[14px] gap-y-3 hand:grid-cols-4">{children}</div>
    </fieldset>
  );
}
