import type { FieldError } from '@/lib/errors';
import { CONDITION_BOUNDS, type ConditionName, type RunConditionsInput } from '@/lib/schemas/conditions';
import { isWithin, rangeSentence } from '@/lib/schemas/quantity';
import {
  DIRECTIONS,
  directionAngle,
  directionFromAngle,
  directionText,
  type DirectionName,
} from './directions';
import { fieldUnit, NUMBER_FIELDS } from './fields';
import { parseNumber } from './parse-number';

/** The conditions of a run as a person types them: text, and the unit chosen beside it. */
export interface RunForm {
  text: Record<ConditionName, string>;
  unit: Partial<Record<ConditionName, string>>;
  drive: string;
  shape: string;
  species: string;
  flow: string;
  flowAngle: string;
  gravity: string;
  gravityAngle: string;
}

/** Digits that a stored number is shown with in its field. */
const SHOWN_DIGITS = 7;

/** Fills the form from stored conditions, in the usual units. */
export function runForm(run: RunConditionsInput): RunForm {
  const text = {} as Record<ConditionName, string>;
  for (const field of NUMBER_FIELDS) {
    const si = conditionOf(run, field);
    text[field] =
      typeof si === 'number'
        ? String(Number(fieldUnit(field, undefined).fromSi(si).toPrecision(SHOWN_DIGITS)))
        : '';
  }
  const angle = (vector: readonly number[] | null | undefined) =>
    vector ? String(directionAngle(vector)) : '';
  return {
    text,
    unit: {},
    drive: run.drive ?? '',
    shape: run.channel?.shape ?? '',
    species: run.tracer?.species ?? '',
    flow: directionText(run.flowDirection),
    flowAngle: angle(run.flowDirection),
    gravity: directionText(run.gravityDirection),
    gravityAngle: angle(run.gravityDirection),
  };
}

/** Changes the unit of a field and rewrites its number, so that the quantity stays the same. */
export function withUnit(form: RunForm, field: ConditionName, key: string): RunForm {
  const typed = parseNumber(form.text[field]);
  const unit = { ...form.unit, [field]: key };
  if (typed === null || Number.isNaN(typed)) return { ...form, unit };
  const si = fieldUnit(field, form.unit[field]).toSi(typed);
  const text = String(Number(fieldUnit(field, key).fromSi(si).toPrecision(SHOWN_DIGITS)));
  return { ...form, unit, text: { ...form.text, [field]: text } };
}

/** Conditions in SI from what was typed, and a sentence for each field that is no such quantity. */
export function readRunForm(form: RunForm, kept: RunConditionsInput = {}) {
  const errors: FieldError[] = [];
  const number = {} as Record<ConditionName, number | null>;
  for (const field of NUMBER_FIELDS) {
    const typed = parseNumber(form.text[field]);
    const si = typed === null ? null : fieldUnit(field, form.unit[field]).toSi(typed);
    const good = si === null || isWithin(si, CONDITION_BOUNDS[field]);
    if (!good)
      errors.push({ path: field, message: rangeSentence(CONDITION_BOUNDS[field], form.text[field].trim()) });
    number[field] = good ? si : null;
  }
  const direction = (path: 'flowDirection' | 'gravityDirection', word: string, angleText: string) => {
    if (word === '') return null;
    if (word !== 'angle') return [...DIRECTIONS[word as DirectionName]] as [number, number];
    const angle = parseNumber(angleText);
    if (angle !== null && Math.abs(angle) <= 360) return directionFromAngle(angle);
    errors.push({
      path,
      message: `The angle must be a number from -360 to 360 degrees (you typed '${angleText}').`,
    });
    return null;
  };
  const species = form.species.trim();
  const hasTracer =
    species !== '' || number['tracer.diameter_m'] !== null || number['tracer.density_kg_m3'] !== null;
  const conditions: RunConditionsInput = {
    temperature_K: number.temperature_K,
    pressure_Pa: number.pressure_Pa,
    drive: (form.drive || null) as RunConditionsInput['drive'],
    heatFlux_W_m2: number.heatFlux_W_m2,
    heatLeak_W: number.heatLeak_W,
    channel: form.shape
      ? {
          ...kept.channel,
          shape: form.shape as 'rectangular' | 'circular',
          width_m: number['channel.width_m'],
          depth_m: form.shape === 'circular' ? null : number['channel.depth_m'],
          length_m: number['channel.length_m'],
        }
      : null,
    tracer: hasTracer
      ? {
          species: species || null,
          diameter_m: number['tracer.diameter_m'],
          density_kg_m3: number['tracer.density_kg_m3'],
        }
      : null,
    tracersPerArea_m2: number.tracersPerArea_m2,
    sheetThickness_m: number.sheetThickness_m,
    frameInterval_s: number.frameInterval_s,
    exposure_s: number.exposure_s,
    pixelSize_m: number.pixelSize_m,
    gamma_s_m2: number.gamma_s_m2,
    v0_m_s: number.v0_m_s,
    flowDirection: direction('flowDirection', form.flow, form.flowAngle),
    gravityDirection: direction('gravityDirection', form.gravity, form.gravityAngle),
  };
  return { conditions, errors };
}

function conditionOf(run: RunConditionsInput, field: ConditionName): number | null | undefined {
  if (field.startsWith('tracer.')) return run.tracer?.[field.slice(7) as 'diameter_m' | 'density_kg_m3'];
  if (field.startsWith('channel.'))
    return run.channel?.[field.slice(8) as 'width_m' | 'depth_m' | 'length_m'];
  return run[field as keyof RunConditionsInput] as number | null | undefined;
}
