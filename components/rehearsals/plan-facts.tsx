import { Facts, Section } from '@/components/ui/sheet';
import { Moment } from '@/components/ui/moment';
import { conditionsWords } from '@/lib/conditions-words';
import { countOf } from '@/lib/format/count';
import { fieldUnit } from '@/lib/run-form/fields';
import type { RehearsalView } from '@/lib/views/rehearsal-view';
import type { RehearsalPlan } from '@/tracking/rehearsal/plan';

const short = (value: number) => String(Number(value.toPrecision(3)));

/** What a rehearsal was made from, in a few lines. */
export function PlanFacts({ rehearsal }: { rehearsal: RehearsalView }) {
  const plan = rehearsal.plan as unknown as RehearsalPlan;
  const { conditions, scene, camera, seed } = plan;
  const micrometres = fieldUnit('sheetThickness_m', 'µm');
  const light =
    scene.snr === null ? `${short(scene.brightness_e ?? 0)} electrons` : `SNR ${short(scene.snr)}`;
  return (
    <Section title="The plan">
      <Facts
        items={[
          { name: 'Conditions', value: conditionsWords(conditions) },
          {
            name: 'Light sheet',
            value: `${short(micrometres.fromSi(conditions.sheetThickness_m ?? 0))} µm${conditions.exposure_s ? `, exposure ${short(conditions.exposure_s * 1e3)} ms` : ''}`,
          },
          {
            name: 'Frames',
            value: `${countOf(scene.frames, 'frame')} of ${scene.widthPx} × ${scene.heightPx} px`,
          },
          {
            name: rehearsal.kind === 'planted' ? 'Planted' : 'Tracers',
            value: `${short(scene.seeding_m2 / 1e6)} per mm², ${short(100 * scene.trappedShare)} % on lines, ${light}, spread ${short(scene.brightnessSpread)}`,
          },
          {
            name: 'Lines',
            value:
              scene.lineDensity_m2 === null
                ? 'as the heat flux leads to expect'
                : `${short(scene.lineDensity_m2 / 1e6)}·10⁶ m⁻²`,
          },
          { name: 'Meetings', value: String(scene.meetings) },
          ...(camera
            ? [
                {
                  name: 'Camera',
                  value: `spots ${short(camera.spotSizePx)} px, background ${short(camera.background_e)} e, read noise ${short(camera.readNoise_e)} e, edges ${short(100 * camera.edgeLight)} %`,
                },
              ]
            : [{ name: 'Camera', value: `as measured in ${rehearsal.source?.name ?? 'the recording'}` }]),
          { name: 'Seed', value: String(seed) },
          {
            name: 'Started',
            value: (
              <>
                <Moment at={rehearsal.createdAt} />
                {rehearsal.createdBy ? ` by ${rehearsal.createdBy.name}` : null}
              </>
            ),
          },
        ]}
      />
    </Section>
  );
}
