import { SeriesMark, seriesLook } from '@/components/charts/series-marks';
import { MarginNote } from '@/components/ui/margin-note';
import { Quantity } from '@/components/ui/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { ComparedFit } from '@/lib/views/compare-view';

const GAMMA = { siPerUnit: 1e4, unit: 's/cm^2' };

/** The law fitted to each campaign beside what is published, and what can't be told from steady runs. */
export function CompareNotes({ fits }: { fits: readonly ComparedFit[] }) {
  return (
    <>
      <MarginNote title="Fitted law">
        <p className="font-serif text-lede-narrow">
          <i>L</i>
          <sup>1/2</sup> = <i>γ</i> (<i>v</i>
          <sub>ns</sub> − <i>v</i>
          <sub>0</sub>)
        </p>
        <p className="text-ink-2">Errors in both quantities; intervals 95 %.</p>
      </MarginNote>
      {fits.map((fit, index) => (
        <MarginNote
          key={fit.campaignId}
          title={
            <>
              <svg viewBox="-7 -7 14 14" aria-hidden="true" className="size-[13px]">
                <SeriesMark look={seriesLook(index)} x={0} y={0} rPx={4.6} />
              </svg>
              {fit.campaignName}
            </>
          }
        >
          {fit.gamma_s_m2 && fit.v0_m_s ? (
            <dl className="grid grid-cols-[auto_1fr] gap-x-3">
              <dt>
                <i className="font-serif">γ</i>
              </dt>
              <dd>
                <Quantity {...fit.gamma_s_m2} {...GAMMA} />
              </dd>
              <dt>
                <i className="font-serif">v</i>
                <sub className="font-serif">0</sub>
              </dt>
              <dd>
                {fit.v0_m_s.low === null ? (
                  'without bounds'
                ) : (
                  <Quantity {...fit.v0_m_s} {...DISPLAY_UNITS.velocity} />
                )}
              </dd>
              <dt>runs</dt>
              <dd>
                {fit.runs}
                {fit.temperature_K === null ? null : (
                  <>
                    {' '}
                    at <Quantity value={fit.temperature_K} digits={4} unit="K" /> on average
                  </>
                )}
              </dd>
            </dl>
          ) : null}
          {fit.note ? <p>{fit.note}</p> : null}
          {fit.publishedGamma_s_m2 === null ? null : (
            <p className="text-ink-2">
              Published at this temperature: <Quantity value={fit.publishedGamma_s_m2} {...GAMMA} />,
              unverified, with a scatter of 20 to 40 % between channels.
            </p>
          )}
        </MarginNote>
      ))}
      <MarginNote title="What steady runs can’t tell" tone="plain">
        <p>
          The published forms of the production term, <i>V L</i>
          <sup>3/2</sup>, <i>V</i>
          <sup>2</sup>
          <i>L</i> and <i>V</i>
          <sup>3</sup>
          <i>L</i>
          <sup>1/2</sup>, have the same steady state, so these runs can’t choose between them. A recorded
          transient would.
        </p>
      </MarginNote>
    </>
  );
}
