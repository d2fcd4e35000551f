import { SelectField } from '@/components/ui/choice';
import { Field, FieldGroup } from '@/components/ui/field';
import type { RehearsalForm } from '@/lib/rehearsal-form/rehearsal-form';
import { PLAN_FIELDS, type PlanFieldForm } from '@/lib/rehearsal-form/fields';
import { PLAN_BOUNDS, type PlanField } from '@/tracking/rehearsal/plan';

const LIGHT = [
  { value: 'electrons', label: 'photoelectrons' },
  { value: 'snr', label: 'SNR' },
];

export interface PlanFieldsProps {
  form: RehearsalForm;
  change: (part: Partial<RehearsalForm>) => void;
  onLeave: (field: string) => void;
  errorOf: (path: string) => string | null;
  /** Line density that the conditions lead to expect, as a text; null for none. */
  expectedDensity: string | null;
}

/** What is in sight, and what takes its picture. */
export function PlanFields({ form, change, onLeave, errorOf, expectedDensity }: PlanFieldsProps) {
  const planted = form.kind === 'planted';
  const number = (field: PlanField, help?: string, placeholder?: string) => (
    <Field
      label={PLAN_BOUNDS[field].name}
      unit={(PLAN_FIELDS[field] as PlanFieldForm).unit}
      inputMode="decimal"
      autoComplete="off"
      spellCheck={false}
      help={help}
      placeholder={placeholder}
      value={form.text[field]}
      onChange={(event) => change({ text: { ...form.text, [field]: event.target.value } })}
      onBlur={() => onLeave(field)}
      error={errorOf(field)}
    />
  );
  return (
    <>
      <FieldGroup legend={planted ? 'Planted tracers' : 'Tracers and lines'}>
        {number('scene.seeding_m2', planted ? 'in sight; few beside the real ones' : 'in sight per area')}
        {number('scene.trappedShare', 'on lines; the rest is free')}
        {number(
          'scene.lineDensity_m2',
          expectedDensity ? 'empty: as the heat flux leads to expect' : 'follows from nothing: enter it',
          expectedDensity ?? undefined,
        )}
        {number('scene.meetings', 'pairs that meet and part')}
        <SelectField
          label="Light of a tracer in"
          options={LIGHT}
          value={form.light}
          onChange={(event) => change({ light: event.target.value as RehearsalForm['light'] })}
        />
        {form.light === 'snr'
          ? number('scene.snr', 'peak over its noise')
          : number('scene.brightness_e', 'mean in a frame')}
        {number('scene.brightnessSpread', 'of ln brightness')}
        {number('seed', 'same seed, same frames')}
      </FieldGroup>
      {planted ? null : (
        <FieldGroup legend="Frames">
          {number('scene.widthPx')}
          {number('scene.heightPx')}
          {number('scene.frames')}
        </FieldGroup>
      )}
      {planted ? null : (
        <FieldGroup legend="Image">
          {number('camera.spotSizePx', 'standard deviation')}
          {number('camera.background_e', 'per pixel, brightest row')}
          {number('camera.readNoise_e')}
          {number('camera.edgeLight', 'of the brightest row')}
        </FieldGroup>
      )}
    </>
  );
}
