import { Fold } from '@/components/ui/fold';
import { Unit } from '@/components/ui/quantity';
import { methodName } from '@/lib/charts/estimate-rows';
import { chartCell } from '@/lib/charts/chart-table';
import type { MeasuresView } from '@/lib/views/analysis-view';
import { SourceFold } from './source-fold';

type Estimate = MeasuresView['estimates'][number];

/** The method of every estimate with its published source. */
const SOURCES: Record<string, string> = {
  crossings:
    'L = 2 P_A for isotropic lines that cross a thin sheet (Saltykov 1945); lines without a tracer added by the share that carries one.',
  'visible-length':
    'L = (4/π) Λ/(A h) from the projected length Λ between the tracers of each line (stereology; the projected length of an isotropic piece is π/4 of its own).',
  'beads-per-length':
    'L = N/(λ A h): trapped tracers per volume over tracers per length of line, from pairs that move as one line.',
  'neighbour-distance':
    'L = 1/(2⟨r⟩²) from the distance to the nearest other line (Clark & Evans, Ecology 35, 445 (1954)), censored at the edges.',
  'line-velocity':
    'v = c₂ (κ/4π) ln(ℓ/a₀)/ℓ (Schwarz 1988), trimmed r.m.s. across the flow, localization noise and drift taken off.',
  'free-path':
    'L = 2/(π b s) from the mean path s of free tracers until a line catches them within b (hits of a convex body by isotropic lines).',
  'heat-flux-prior':
    'L = γ²(v_ns − v_0)² (Vinen 1957; Adachi, Fujiyama & Tsubota, Phys. Rev. B 81, 104511 (2010)).',
  decay: '1/L grows by χ₂κ/2π per time (Vinen 1957).',
  'marked-chains':
    'L = (4/π) Λ/(A h s) from the projected length Λ of lines that people marked in complete frames; the share s of a line between its outermost tracers follows from the tracers per marked length (Poisson along isotropic lines).',
  combined:
    'Random-effects mean of ln L (DerSimonian & Laird 1986); methods that share tracers count as one; none where they disagree at 1 in 100.',
};

/** Names of inputs in words: `tracersPerLength` is "tracers per length". */
const inWords = (name: string) =>
  name in SOURCES ? methodName(name) : name.replace(/([A-Z])/g, (letter) => ` ${letter.toLowerCase()}`);

/** Each estimate with its method, its source and all its inputs. */
export function EstimateSources({ estimates }: { estimates: readonly Estimate[] }) {
  return (
    <Fold title="Inputs and source of each estimate" className="pt-2">
      <div className="flex flex-col pl-3">
        {estimates.map((estimate) => (
          <SourceFold
            key={estimate.method}
            className=""
            title={methodName(estimate.method)}
            method={SOURCES[estimate.method] ?? ''}
            inputs={Object.entries(estimate.inputs).map(([name, { value, unit }]) => ({
              name: inWords(name),
              value:
                value === null ? (
                  'not known'
                ) : (
                  <>
                    {chartCell(value)} <Unit>{unit}</Unit>
                  </>
                ),
            }))}
          />
        ))}
      </div>
    </Fold>
  );
}
