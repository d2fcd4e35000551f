import type { FieldError } from '@/lib/errors';
import { parseNumber } from '@/lib/run-form/parse-number';
import { readRunForm, runForm, type RunForm } from '@/lib/run-form/run-form';
import type { RunConditionsInput } from '@/lib/schemas/conditions';
import type { RehearsalCreate, RehearsalDraft } from '@/lib/schemas/rehearsal';
import { PLAN_BOUNDS, planFieldError, type PlanField, type RehearsalPlan } from '@/tracking/rehearsal/plan';
import { PLAN_FIELD_NAMES, PLAN_FIELDS, planRange, planText } from './fields';

/** A rehearsal as a person types it. */
export interface RehearsalForm {
  name: string;
  kind: 'simulated' | 'planted';
  /** The recording in whose frames particles are planted. */
  recordingId: string;
  /** Which of brightness and SNR is typed. */
  light: 'electrons' | 'snr';
  text: Record<PlanField, string>;
  conditions: RunForm;
}

/** Conditions of a plan that can be rehearsed as it stands, where there is no run to start from. */
const FIRST_CONDITIONS: RunConditionsInput = {
  temperature_K: 1.85,
  drive: 'counterflow',
  heatFlux_W_m2: 300,
  flowDirection: [1, 0],
  gravityDirection: [0, 1],
  sheetThickness_m: 8e-5,
  frameInterval_s: 4e-3,
  exposure_s: 1e-3,
  pixelSize_m: 8e-6,
};

/** An empty form with the usual values, or one filled from an earlier plan or a run's conditions. */
export function rehearsalForm(
  from: { plan?: RehearsalPlan; conditions?: RunConditionsInput } & Partial<
    Pick<RehearsalForm, 'name' | 'kind' | 'recordingId'>
  > = {},
): RehearsalForm {
  // prettier-ignore
  const { plan } = from;
  const text = {} as Record<PlanField, string>;
  for (const field of PLAN_FIELD_NAMES) {
    const stored = plan && planText(field, valueIn(plan, field));
    const open = field === 'scene.lineDensity_m2' ? '' : PLAN_FIELDS[field].usual;
    text[field] = stored || open;
  }
  return {
    name: from.name ?? '',
    kind: from.kind ?? 'simulated',
    recordingId: from.recordingId ?? '',
    light: plan && plan.scene.snr !== null ? 'snr' : 'electrons',
    text,
    conditions: runForm(plan?.conditions ?? from.conditions ?? FIRST_CONDITIONS),
  };
}

/** The request that a form stands for, and a sentence for each field that can't be read. */
export function readRehearsalForm(form: RehearsalForm): {
  request: Omit<RehearsalCreate, 'recipe'>;
  conditions: RunConditionsInput;
  errors: FieldError[];
} {
  const planted = form.kind === 'planted';
  const errors: FieldError[] = [];
  const number = (field: PlanField) => {
    const typed = parseNumber(form.text[field]);
    const value = typed === null ? null : Number((typed * PLAN_FIELDS[field].perTyped).toPrecision(12));
    const open = field === 'scene.lineDensity_m2' && value === null;
    if (open || planFieldError(field, value) === null) return value ?? undefined;
    const message = `${PLAN_BOUNDS[field].name} must be ${planRange(field)} (you typed '${form.text[field].trim().slice(0, 40)}').`;
    errors.push({ path: field, message });
    return undefined;
  };
  const read = readRunForm(form.conditions);
  if (!planted) errors.push(...read.errors);
  if (planted && form.recordingId === '') {
    errors.push({ path: 'recordingId', message: 'Choose the recording in which particles are planted.' });
  }
  if (form.name.trim() === '') errors.push({ path: 'name', message: 'Enter a name.' });
  const light = form.light === 'snr' ? { snr: number('scene.snr') } : { brightness_e: number('scene.brightness_e') }; // prettier-ignore
  const scene: RehearsalCreate['scene'] = {
    ...(planted
      ? {}
      : {
          widthPx: number('scene.widthPx'),
          heightPx: number('scene.heightPx'),
          frames: number('scene.frames'),
        }),
    seeding_m2: number('scene.seeding_m2'),
    trappedShare: number('scene.trappedShare'),
    lineDensity_m2: number('scene.lineDensity_m2') ?? null,
    ...light,
    brightnessSpread: number('scene.brightnessSpread'),
    meetings: number('scene.meetings'),
  };
  const conditions = { ...read.conditions, tracersPerArea_m2: scene.seeding_m2 ?? null };
  const request: Omit<RehearsalCreate, 'recipe'> = {
    name: form.name.trim(),
    kind: form.kind,
    scene,
    seed: number('seed'),
    ...(planted
      ? { recordingId: form.recordingId || undefined }
      : {
          conditions,
          camera: {
            spotSizePx: number('camera.spotSizePx'),
            background_e: number('camera.background_e'),
            readNoise_e: number('camera.readNoise_e'),
            edgeLight: number('camera.edgeLight'),
          },
        }),
  };
  return { request, conditions, errors };
}

function valueIn(plan: RehearsalPlan, field: PlanField): number | null {
  if (field === 'seed') return plan.seed;
  const [part, name] = field.split('.') as ['scene' | 'camera', string];
  const values = plan[part] as unknown as Record<string, number | null> | null;
  return values?.[name] ?? null;
}

const OWN = ['name', 'kind', 'recordingId', 'light'] as const;
const CONDITION_WORDS = [
  'drive',
  'shape',
  'species',
  'flow',
  'flowAngle',
  'gravity',
  'gravityAngle',
] as const;

/** A form as short texts, to be kept while it is not sent. */
export function draftOf(form: RehearsalForm, recipe: Record<string, string> = {}): RehearsalDraft {
  const draft: Record<string, string> = {};
  const keep = (key: string, text: string | undefined) => {
    if (text) draft[key] = text.slice(0, 400);
  };
  for (const name of OWN) keep(name, form[name]);
  for (const field of PLAN_FIELD_NAMES) keep(`text.${field}`, form.text[field]);
  for (const [field, text] of Object.entries(form.conditions.text)) keep(`condition.${field}`, text);
  for (const [field, unit] of Object.entries(form.conditions.unit)) keep(`unit.${field}`, unit);
  for (const name of CONDITION_WORDS) keep(`word.${name}`, form.conditions[name]);
  for (const [field, text] of Object.entries(recipe)) keep(`recipe.${field}`, text);
  return draft;
}

/** The form that a draft was made of; what it does not know is empty. */
export function formOfDraft(draft: RehearsalDraft): RehearsalForm {
  const empty = rehearsalForm({ conditions: {} });
  const part = (prefix: string) => partOf(draft, prefix);
  const words = part('word');
  const emptied = Object.fromEntries(PLAN_FIELD_NAMES.map((field) => [field, ''])) as Record<PlanField, string>; // prettier-ignore
  return {
    name: draft.name ?? '',
    kind: draft.kind === 'planted' ? 'planted' : 'simulated',
    recordingId: draft.recordingId ?? '',
    light: draft.light === 'snr' ? 'snr' : 'electrons',
    text: { ...emptied, ...part('text') },
    conditions: {
      ...empty.conditions,
      text: { ...empty.conditions.text, ...part('condition') },
      unit: part('unit'),
      ...Object.fromEntries(CONDITION_WORDS.map((name) => [name, words[name] ?? ''])),
    } as RunForm,
  };
}

/** What stood in the fields of the recipe when a draft was kept. */
export const recipeOfDraft = (draft: RehearsalDraft): Record<string, string> => partOf(draft, 'recipe');

function partOf(draft: RehearsalDraft, prefix: string): Record<string, string> {
  return Object.fromEntries(
    Object.entries(draft)
      .filter(([key]) => key.startsWith(`${prefix}.`))
      .map(([key, text]) => [key.slice(prefix.length + 1), text]),
  );
}
