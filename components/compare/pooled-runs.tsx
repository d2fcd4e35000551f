import Link from 'next/link';
import { Quantity } from '@/components/ui/quantity';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import type { PooledPdfView } from '@/lib/views/compare-view';

/** Which runs are in a pooled distribution, and which are not and why. */
export function PooledRuns({ view }: { view: PooledPdfView }) {
  const scaled = view.scale !== 'none';
  return (
    <>
      {view.runs.length > 0 ? (
        <Table label="Runs in the distribution" density="dense">
          <thead>
            <tr>
              <HeadCell>Run</HeadCell>
              <HeadCell numeric unit="ms">
                Lag
              </HeadCell>
              <HeadCell numeric narrow="hide">
                Tracks
              </HeadCell>
              <HeadCell numeric>Velocities</HeadCell>
              {scaled ? (
                <HeadCell numeric unit="mm/s">
                  {view.scale === 'deviation' ? 'σ' : 'κ/l'}
                </HeadCell>
              ) : null}
            </tr>
          </thead>
          <tbody>
            {view.runs.map((run) => (
              <Row key={run.runId}>
                <Cell head>
                  <Link href={`/analyses/${run.analysisId}`}>{run.runName}</Link>
                  <CellNote>{run.campaignName}</CellNote>
                </Cell>
                <Cell numeric>
                  <Quantity value={run.lag_s} siPerUnit={1e-3} digits={3} />
                </Cell>
                <Cell numeric narrow="hide">
                  {formatCount(run.tracks)}
                </Cell>
                <Cell numeric>{formatCount(run.samples)}</Cell>
                {scaled ? (
                  <Cell numeric>
                    <Quantity value={run.scale_m_s} siPerUnit={1e-3} digits={3} />
                  </Cell>
                ) : null}
              </Row>
            ))}
          </tbody>
        </Table>
      ) : null}
      {view.leftOut.length > 0 ? (
        <ul className="pt-2 text-note text-ink-2">
          {view.leftOut.map(({ runId, runName, reason }) => (
            <li key={runId}>
              <Link href={`/runs/${runId}`}>{runName}</Link>: {reason}
            </li>
          ))}
        </ul>
      ) : null}
    </>
  );
}
