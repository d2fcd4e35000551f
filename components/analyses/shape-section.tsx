import { Quantity } from '@/components/ui/quantity';
import { Facts, Section } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DetailsView } from '@/lib/views/details-view';
import { SourceFold } from './source-fold';

type Shape = NonNullable<DetailsView['shape']>;

/** Shape of the lines as chains of tracers show it. */
export function ShapeSection({ shape }: { shape: Shape }) {
  const { order, curvature } = shape;
  return (
    <Section title="Shape of the lines" count={countOf(shape.chains, 'chain')}>
      <Facts
        items={[
          {
            name: 'Seen length',
            value: (
              <>
                <Quantity value={shape.length_m} {...DISPLAY_UNITS.channelLength} digits={3} /> of line in a
                frame, in projection,{' '}
                <Quantity value={shape.spacing_m} {...DISPLAY_UNITS.smallLength} digits={3} /> from tracer to
                tracer
              </>
            ),
          },
          {
            name: 'Direction',
            value: order ? (
              <>
                ⟨cos 2θ⟩ <Quantity {...order} /> against the flow: {orderWords(order)}
              </>
            ) : (
              'too few lines to tell'
            ),
          },
          {
            name: 'Curvature',
            value: curvature ? (
              <>
                mean <Quantity value={curvature.mean_per_m} siPerUnit={1e3} unit="mm^-1" digits={2} />, r.m.s.{' '}
                <Quantity value={curvature.rms_per_m} siPerUnit={1e3} unit="mm^-1" digits={2} /> over{' '}
                {countOf(curvature.chains, 'chain')} of five tracers or more, {curvature.straight} of them
                straight
              </>
            ) : (
              `${countOf(shape.longChains, 'chain')} of five tracers or more: too few to tell`
            ),
          },
        ]}
      />
      <p className="pt-1 text-note text-ink-2">{shape.note}</p>
      <SourceFold
        method="Tracers that keep their separation sit on one line; they are joined in their order along its main axis. Two-dimensional order parameter of the pieces, weighted by length; curvature by least-squares circles (Kåsa, IEEE Trans. Instrum. Meas. 25, 8 (1976)), radii beyond ten spacings counted as straight. Measures of shape after Schwarz 1988."
        inputs={[]}
      />
    </Section>
  );
}

function orderWords({ low, high }: { low: number; high: number }): string {
  if (low > 0) return 'the lines lie along it by preference';
  if (high < 0) return 'the lines lie across it by preference';
  return 'no preference that stands out';
}
