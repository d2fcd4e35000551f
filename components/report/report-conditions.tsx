import { Quantity, QuantitySymbol } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { DRIVE_WORDS } from '@/lib/compare/selection-words';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { RunConditionsInput } from '@/lib/schemas/conditions';

export interface ReportedConditions {
  id: string;
  name: string;
  conditions: RunConditionsInput;
}

const { heatFlux, smallLength, exposure } = DISPLAY_UNITS;

/** What was set in each run, and with what it was filmed. */
export function ReportConditions({ runs }: { runs: readonly ReportedConditions[] }) {
  if (runs.length === 0) return <p className="text-ink-2">This campaign has no runs yet.</p>;
  return (
    <Table label="Conditions" density="dense">
      <thead>
        <tr>
          <HeadCell>Run</HeadCell>
          <HeadCell numeric unit="K">
            <QuantitySymbol letter="T" />
          </HeadCell>
          <HeadCell>Drive</HeadCell>
          <HeadCell numeric unit={heatFlux.unit}>
            <QuantitySymbol letter="q" />
          </HeadCell>
          <HeadCell narrow="hide">Tracer</HeadCell>
          <HeadCell numeric narrow="hide" unit={smallLength.unit}>
            Sheet
          </HeadCell>
          <HeadCell numeric narrow="hide" unit={smallLength.unit}>
            Pixel
          </HeadCell>
          <HeadCell numeric narrow="hide" unit="Hz">
            Frames
          </HeadCell>
          <HeadCell numeric narrow="hide" unit={exposure.unit}>
            Exposure
          </HeadCell>
        </tr>
      </thead>
      <tbody>
        {runs.map(({ id, name, conditions: c }) => (
          <Row key={id}>
            <Cell head>{name}</Cell>
            <Cell numeric>
              <Quantity value={c.temperature_K} digits={4} />
            </Cell>
            <Cell>{c.drive ? DRIVE_WORDS[c.drive] : ''}</Cell>
            <Cell numeric>
              <Quantity value={c.heatFlux_W_m2} siPerUnit={heatFlux.siPerUnit} />
            </Cell>
            <Cell narrow="hide">{tracerWords(c.tracer)}</Cell>
            <Cell numeric narrow="hide">
              <Quantity value={c.sheetThickness_m} siPerUnit={smallLength.siPerUnit} />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity value={c.pixelSize_m} siPerUnit={smallLength.siPerUnit} />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity value={c.frameInterval_s ? 1 / c.frameInterval_s : null} />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity value={c.exposure_s} siPerUnit={exposure.siPerUnit} />
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

function tracerWords(tracer: RunConditionsInput['tracer']): string {
  if (!tracer) return '';
  const { species, diameter_m } = tracer as { species?: string | null; diameter_m?: number | null };
  const size = diameter_m ? `${Number((diameter_m / 1e-6).toPrecision(3))} µm` : '';
  return [species, size].filter(Boolean).join(', ');
}
