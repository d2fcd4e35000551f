import { describe, expect, it } from 'vitest';
import { draftOf, formOfDraft, readRehearsalForm, rehearsalForm } from '@/lib/rehearsal-form/rehearsal-form';
import { rehearsalCreateSchema, rehearsalDraftSchema } from '@/lib/schemas/rehearsal';
import { REHEARSAL_PLAN } from '../../helpers/rehearsal-plan';

describe('the form of a rehearsal', () => {
  it('is, with a name, a request that can be sent as it first stands', () => {
    const { request, errors } = readRehearsalForm(rehearsalForm({ name: 'First' }));
    expect(errors).toEqual([]);
    expect(rehearsalCreateSchema.parse(request)).toMatchObject({ name: 'First', kind: 'simulated' });
  });

  it('gives an earlier plan back as it was, through the units of the laboratory', () => {
    const { request, errors } = readRehearsalForm(rehearsalForm({ name: 'Again', plan: REHEARSAL_PLAN }));
    expect(errors).toEqual([]);
    const { brightness_e, snr, ...scene } = REHEARSAL_PLAN.scene;
    expect(request.scene).toEqual({ ...scene, brightness_e });
    expect(snr).toBeNull();
    expect(request.camera).toEqual(REHEARSAL_PLAN.camera);
    expect(request.seed).toBe(REHEARSAL_PLAN.seed);
    expect(request.conditions).toMatchObject(REHEARSAL_PLAN.conditions);
  });

  it('names the field and its range in the units that are typed', () => {
    const form = rehearsalForm({ name: '' });
    form.text['scene.seeding_m2'] = 'many';
    form.text['scene.trappedShare'] = '120';
    const { errors } = readRehearsalForm(form);
    expect(errors).toEqual([
      { path: 'name', message: 'Enter a name.' },
      { path: 'scene.seeding_m2', message: "Seeding density must be a number from 0.01 to 10000 mm-2 (you typed 'many')." }, // prettier-ignore
      { path: 'scene.trappedShare', message: "Trapped share must be a number from 0 to 100 % (you typed '120')." }, // prettier-ignore
    ]);
  });

  it('asks of planted particles for a recording, and sends neither camera nor conditions', () => {
    const form = rehearsalForm({ name: 'Planted', kind: 'planted' });
    expect(readRehearsalForm(form).errors[0].path).toBe('recordingId');
    form.recordingId = '01234567-89ab-7def-8123-456789abcdef';
    const { request, errors } = readRehearsalForm(form);
    expect(errors).toEqual([]);
    expect(rehearsalCreateSchema.parse(request)).toEqual(request);
    expect(request).not.toHaveProperty('camera');
    expect(request.scene).not.toHaveProperty('frames');
  });

  it('is kept as a draft in any state, and comes back the same', () => {
    const form = rehearsalForm({ name: 'Half typed', plan: REHEARSAL_PLAN });
    form.light = 'snr';
    form.text['scene.frames'] = '1e';
    form.text.seed = '';
    form.conditions.unit.pixelSize_m = 'µm';
    const draft = rehearsalDraftSchema.parse(draftOf(form));
    expect(formOfDraft(draft)).toEqual(form);
    expect(formOfDraft({}).name).toBe('');
  });
});
