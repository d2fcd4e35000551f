'use client';

import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { useTracks, type TrackTableState } from '@/components/data/use-tracks';
import { probabilityText } from '@/components/canvas/track-words';
import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { StrokeSample } from '@/components/ui/strokes';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { countOf, formatCount } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { TrackRowView } from '@/lib/views/analysis-view';
import { SortHead } from './sort-head';

const POPULATIONS = ['all', 'trapped', 'free', 'undecided'] as const;
const FIRST_PAGE = [''];

interface TrackTableProps {
  analysisId: string;
  tracks: number | null;
  /** Null while the tracks are not linked. */
  ready: string | null;
  chosen: number | null;
  onShow: (row: TrackRowView) => void;
}

/** Tracks as a table: what the canvas shows, in words and numbers. */
export function TrackTable({ analysisId, tracks, ready, chosen, onShow }: TrackTableProps) {
  const [state, setState] = useState<TrackTableState>({
    sort: 'track',
    population: 'all',
    pages: FIRST_PAGE,
  });
  const query = useTracks(analysisId, state, ready);
  const sort = (next: string) => setState({ ...state, sort: next, pages: FIRST_PAGE });
  const head = { sort: state.sort, onSort: sort };
  return (
    <Section
      id="tracks"
      title="Tracks"
      count={tracks === null ? undefined : countOf(tracks, 'track')}
      tools={
        <Segment
          label="Population"
          options={POPULATIONS.map((value) => ({ value, label: value }))}
          value={state.population}
          onChange={(population) => setState({ ...state, population, pages: FIRST_PAGE })}
        />
      }
    >
      {ready === null ? <EmptyState>The tracks are not linked yet.</EmptyState> : null}
      {ready === null ? null : (
        <Answer query={query} what="the tracks">
          {(page) =>
            page === null ? (
              <EmptyState>The tracks are not linked yet.</EmptyState>
            ) : page.items.length === 0 ? (
              <EmptyState>
                {state.population === 'all' ? 'No tracks were found.' : `No ${state.population} tracks.`}
              </EmptyState>
            ) : (
              <>
                <Table label="Tracks" density="dense" aria-busy={query.isPlaceholderData || undefined}>
                  <thead>
                    <tr>
                      <SortHead field="track" {...head}>
                        Track
                      </SortHead>
                      <SortHead field="firstFrame" numeric {...head}>
                        First frame
                      </SortHead>
                      <SortHead field="points" numeric {...head}>
                        Frames
                      </SortHead>
                      <HeadCell numeric narrow="hide">
                        Bridged
                      </HeadCell>
                      <HeadCell>Population</HeadCell>
                      <SortHead field="pTrapped" numeric narrow="hide" {...head}>
                        p trapped
                      </SortHead>
                      <SortHead field="meanSpeed_m_s" numeric narrow="hide" unit="mm/s" {...head}>
                        Mean speed
                      </SortHead>
                      <SortHead field="brightness" numeric narrow="hide" unit="e" {...head}>
                        Brightness
                      </SortHead>
                      <HeadCell silent>In the frames</HeadCell>
                    </tr>
                  </thead>
                  <tbody>
                    {page.items.map((row) => (
                      <TrackRow key={row.track} row={row} chosen={row.track === chosen} onShow={onShow} />
                    ))}
                  </tbody>
                </Table>
                <nav aria-label="Pages of tracks" className="flex gap-2 pt-3 print:hidden">
                  {state.pages.length > 1 ? (
                    <Button onClick={() => setState({ ...state, pages: state.pages.slice(0, -1) })}>
                      Back
                    </Button>
                  ) : null}
                  {page.nextCursor ? (
                    <Button
                      onClick={() => setState({ ...state, pages: [...state.pages, page.nextCursor ?? ''] })}
                    >
                      Next
                    </Button>
                  ) : null}
                </nav>
              </>
            )
          }
        </Answer>
      )}
    </Section>
  );
}

interface TrackRowProps {
  row: TrackRowView;
  chosen: boolean;
  onShow: (row: TrackRowView) => void;
}

function TrackRow({ row, chosen, onShow }: TrackRowProps) {
  return (
    <Row selected={chosen}>
      <Cell head className="pl-2 tabular-nums">
        {formatCount(row.track)}
      </Cell>
      <Cell numeric>{formatCount(row.firstFrame)}</Cell>
      <Cell numeric>{formatCount(row.points)}</Cell>
      <Cell numeric narrow="hide">
        {formatCount(row.bridged)}
      </Cell>
      <Cell>
        {row.population ? (
          <span className="inline-flex items-center gap-2">
            <StrokeSample stroke={row.population} />
            {row.population}
          </span>
        ) : (
          <span className="sr-only">not told</span>
        )}
      </Cell>
      <Cell numeric narrow="hide">
        {row.pTrapped === null ? (
          <span className="sr-only">not measured</span>
        ) : (
          probabilityText(row.pTrapped)
        )}
      </Cell>
      <Cell numeric narrow="hide">
        <Quantity value={row.meanSpeed_m_s} siPerUnit={DISPLAY_UNITS.velocity.siPerUnit} digits={3} />
      </Cell>
      <Cell numeric narrow="hide">
        {formatCount(row.brightness)}
      </Cell>
      <Cell numeric>
        <button
          type="button"
          onClick={() => onShow(row)}
          aria-label={`Show track ${row.track} in the frames`}
          className="min-h-6 underline decoration-line-strong underline-offset-[3px] hover:decoration-violet"
        >
          Show
        </button>
      </Cell>
    </Row>
  );
}
