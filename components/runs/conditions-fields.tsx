import type { ReactNode } from 'react';
import { SelectField } from '@/components/ui/choice';
import { Field, FieldGroup } from '@/components/ui/field';
import { DRIVE_NAMES } from '@/lib/run-form/drive-names';
import type { RunForm } from '@/lib/run-form/run-form';
import type { ConditionName } from '@/lib/schemas/conditions';
import { QuantityField } from './quantity-field';

const DRIVES = [
  { value: '', label: 'not set' },
  ...Object.entries(DRIVE_NAMES).map(([value, label]) => ({ value, label })),
];
const SHAPES = [
  { value: '', label: 'not set' },
  { value: 'rectangular', label: 'rectangular' },
  { value: 'circular', label: 'circular' },
];
const WAYS = [
  { value: '', label: 'not set' },
  { value: 'right', label: 'to the right' },
  { value: 'left', label: 'to the left' },
  { value: 'up', label: 'up the image' },
  { value: 'down', label: 'down the image' },
  { value: 'angle', label: 'at an angle' },
];
/** Offered while typing; any other species can be written. */
const SPECIES = [
  'solid hydrogen',
  'solid deuterium',
  'HD',
  'H2/D2 mixture',
  'hollow glass spheres',
  'solid air',
];

/** Where the laboratory's own gamma and v_0 stand. */
const gammaHelp = (
  <>
    in √<i>L</i> = <i>γ</i> (<i>v</i>
    <sub>ns</sub> − <i>v</i>
    <sub>0</sub>)
  </>
);

export interface ConditionsFieldsProps {
  form: RunForm;
  change: (part: Partial<RunForm>) => void;
  onText: (field: ConditionName, text: string) => void;
  onUnit: (field: ConditionName, unit: string) => void;
  onLeave: (field: string) => void;
  errorOf: (path: string) => string | null;
  warningOf: (path: string) => string | null;
  disabled: boolean;
  /** False where the number of tracers is asked for elsewhere. */
  asksTracersPerArea?: boolean;
}

/** Every condition of a run in four groups. */
export function ConditionsFields(props: ConditionsFieldsProps) {
  const { form, change, onText, onUnit, onLeave, errorOf, warningOf, disabled } = props;
  const { asksTracersPerArea = true } = props;
  const number = (field: ConditionName, label: string, help?: ReactNode) => (
    <QuantityField
      field={field}
      label={label}
      text={form.text[field]}
      unit={form.unit[field]}
      onText={onText}
      onUnit={onUnit}
      onLeave={onLeave}
      error={errorOf(field)}
      warning={warningOf(field)}
      help={help}
      disabled={disabled}
    />
  );
  const heated = form.drive === 'counterflow' || form.drive === 'coflow' || form.drive === '';
  return (
    <>
      <FieldGroup legend="Helium">
        {number('temperature_K', 'Temperature')}
        {number('pressure_Pa', 'Pressure', 'empty: saturated vapour')}
      </FieldGroup>
      <FieldGroup legend="Drive">
        <SelectField
          label="Kind"
          className="col-span-2"
          options={DRIVES}
          value={form.drive}
          onChange={(event) => change({ drive: event.target.value })}
          error={errorOf('drive')}
          disabled={disabled}
        />
        {heated ? number('heatFlux_W_m2', 'Heat flux') : null}
        {heated ? number('heatLeak_W', 'Heat leak') : null}
        <SelectField
          label="Channel"
          options={SHAPES}
          value={form.shape}
          onChange={(event) => change({ shape: event.target.value })}
          disabled={disabled}
        />
        {form.shape ? number('channel.width_m', form.shape === 'circular' ? 'Diameter' : 'Width') : null}
        {form.shape === 'rectangular' ? number('channel.depth_m', 'Depth') : null}
        {form.shape ? number('channel.length_m', 'Length') : null}
        <SelectField
          label="Normal fluid goes"
          className={form.shape ? '' : 'col-span-2'}
          options={WAYS}
          value={form.flow}
          onChange={(event) => change({ flow: event.target.value })}
          error={form.flow === 'angle' ? null : errorOf('flowDirection')}
          disabled={disabled}
        />
        {form.flow === 'angle' ? (
          <Field
            label="Angle, from right to down"
            unit="°"
            inputMode="decimal"
            value={form.flowAngle}
            onChange={(event) => change({ flowAngle: event.target.value })}
            onBlur={() => onLeave('flowDirection')}
            error={errorOf('flowDirection')}
            disabled={disabled}
          />
        ) : null}
        <SelectField
          label="Gravity points"
          options={WAYS}
          value={form.gravity}
          onChange={(event) => change({ gravity: event.target.value })}
          help={form.gravity === '' ? 'not set: down' : undefined}
          disabled={disabled}
        />
        {form.gravity === 'angle' ? (
          <Field
            label="Angle of gravity"
            unit="°"
            inputMode="decimal"
            value={form.gravityAngle}
            onChange={(event) => change({ gravityAngle: event.target.value })}
            onBlur={() => onLeave('gravityDirection')}
            error={errorOf('gravityDirection')}
            disabled={disabled}
          />
        ) : null}
      </FieldGroup>
      <FieldGroup legend="Tracer">
        <Field
          label="Species"
          className="col-span-2"
          list="tracer-species"
          value={form.species}
          onChange={(event) => change({ species: event.target.value })}
          onBlur={() => onLeave('tracer.species')}
          error={errorOf('tracer.species')}
          disabled={disabled}
        />
        <datalist id="tracer-species">
          {SPECIES.map((name) => (
            <option key={name} value={name} />
          ))}
        </datalist>
        {number('tracer.diameter_m', 'Diameter')}
        {number('tracer.density_kg_m3', 'Density')}
        {asksTracersPerArea ? number('tracersPerArea_m2', 'Tracers per area') : null}
      </FieldGroup>
      <FieldGroup legend="Light and camera">
        {number('sheetThickness_m', 'Sheet thickness')}
        {number(
          'frameInterval_s',
          form.unit.frameInterval_s && form.unit.frameInterval_s !== 'Hz' ? 'Frame interval' : 'Frame rate',
        )}
        {number('exposure_s', 'Exposure')}
        {number('pixelSize_m', 'Pixel size')}
      </FieldGroup>
      <FieldGroup legend="Expectation" note="where your laboratory knows its own">
        {number('gamma_s_m2', 'Own γ', gammaHelp)}
        {number('v0_m_s', 'Own v₀')}
      </FieldGroup>
    </>
  );
}
