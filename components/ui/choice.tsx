import { useId, type ComponentPropsWithRef, type ReactNode } from 'react';
import { boxClasses, describedBy, FieldFrame, messageOf, type FieldWords } from './field-frame';

export interface Option<Value extends string = string> {
  value: Value;
  label: string;
  disabled?: boolean;
}

/** The small arrow of things that open. */
export function Chevron({ className = '' }: { className?: string }) {
  return (
    <svg viewBox="0 0 9 9" aria-hidden="true" className={`size-[9px] shrink-0 ${className}`}>
      <path d="M1 2.8l3.5 3.5L8 2.8" fill="none" stroke="currentColor" strokeWidth="1.4" />
    </svg>
  );
}

type SelectFieldProps = FieldWords &
  Omit<ComponentPropsWithRef<'select'>, 'className' | 'children'> & {
    options: readonly Option[];
    className?: string;
  };

/** A list to choose one from, for more than three options. */
export function SelectField({
  label,
  help,
  error,
  warning,
  hideLabel,
  options,
  className,
  id,
  ...select
}: SelectFieldProps) {
  const ownId = useId();
  const fieldId = id ?? ownId;
  const words = { label, help, error, warning, hideLabel };
  return (
    <FieldFrame id={fieldId} messageId={`${fieldId}-words`} className={className} {...words}>
      <span className="relative block">
        <select
          id={fieldId}
          className={`h-10 w-full appearance-none truncate py-0 pl-[9px] pr-7 focus-visible:outline-offset-1 disabled:cursor-not-allowed disabled:border-dashed disabled:bg-transparent disabled:text-ink-3 hand:h-control pointer-coarse:h-control-touch ${boxClasses(words)}`}
          {...describedBy(words, `${fieldId}-words`)}
          {...select}
        >
          {options.map((option) => (
            <option key={option.value} value={option.value} disabled={option.disabled} className="bg-leaf">
              {option.label}
            </option>
          ))}
        </select>
        <Chevron className="pointer-events-none absolute right-[10px] top-1/2 -translate-y-1/2" />
      </span>
    </FieldFrame>
  );
}

interface SegmentProps<Value extends string> {
  /** Read to screen readers; shown above only with `showLabel`. */
  label: string;
  showLabel?: boolean;
  options: readonly { value: Value; label: ReactNode; disabled?: boolean }[];
  value?: Value;
  defaultValue?: Value;
  onChange?: (value: Value) => void;
  /** Name in a form; one is made up otherwise. */
  name?: string;
}

/** Two or three choices side by side; arrow keys move as in any radio group. */
export function Segment<Value extends string>({
  label,
  showLabel = false,
  options,
  value,
  defaultValue,
  onChange,
  name,
}: SegmentProps<Value>) {
  const ownName = useId();
  return (
    <fieldset className="min-w-0 print:hidden">
      <legend className={showLabel ? 'pb-[3px] text-small text-ink-2' : 'sr-only'}>{label}</legend>
      <span className="inline-flex rounded-button border border-line-strong has-[:focus-visible]:outline-2 has-[:focus-visible]:outline-offset-2 has-[:focus-visible]:outline-violet">
        {options.map((option) => (
          <label
            key={option.value}
            className="relative flex h-[38px] cursor-pointer items-center border-l border-line-strong px-[10px] text-note text-ink-2 first:rounded-l-field first:border-l-0 last:rounded-r-field hover:text-ink has-[:checked]:bg-ink has-[:checked]:font-strong has-[:checked]:text-paper has-[:disabled]:cursor-not-allowed has-[:disabled]:text-ink-3 hand:h-[28px] pointer-coarse:h-[42px]"
          >
            <input
              type="radio"
              name={name ?? ownName}
              value={option.value}
              disabled={option.disabled}
              {...(value === undefined
                ? { defaultChecked: option.value === defaultValue }
                : { checked: option.value === value })}
              onChange={onChange ? () => onChange(option.value) : undefined}
              className="absolute inset-0 size-full cursor-pointer appearance-none opacity-0"
            />
            {option.label}
          </label>
        ))}
      </span>
    </fieldset>
  );
}

type CheckboxProps = Omit<FieldWords, 'hideLabel'> &
  Omit<ComponentPropsWithRef<'input'>, 'type' | 'className'> & { className?: string };

/** A yes or no; ink when yes. */
export function Checkbox({ label, help, error, warning, id, className = '', ...input }: CheckboxProps) {
  const ownId = useId();
  const fieldId = id ?? ownId;
  const words = { label, help, error, warning };
  const message = messageOf(words);
  return (
    <div className={`flex min-w-0 flex-col gap-[3px] ${className}`}>
      <label htmlFor={fieldId} className="flex min-h-6 cursor-pointer items-start gap-2">
        <span className="relative mt-[3px] size-[14px] shrink-0">
          <input
            id={fieldId}
            type="checkbox"
            className={`peer absolute inset-0 appearance-none checked:border-ink checked:bg-ink ${boxClasses(words)}`}
            {...describedBy(words, `${fieldId}-words`)}
            {...input}
          />
          <svg
            viewBox="0 0 14 14"
            aria-hidden="true"
            className="pointer-events-none invisible absolute inset-0 peer-checked:visible"
          >
            <path d="M3.4 7.2l2.5 2.5 4.6-5.2" className="fill-none stroke-paper" strokeWidth="1.8" />
          </svg>
        </span>
        <span>{label}</span>
      </label>
      {message ? (
        <p id={`${fieldId}-words`} className={`pl-[22px] text-small ${message.tone}`}>
          {message.words}
        </p>
      ) : null}
    </div>
  );
}
