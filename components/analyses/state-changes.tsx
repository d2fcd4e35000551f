import { Fold } from '@/components/ui/fold';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { countOf, formatCount } from '@/lib/format/count';
import type { DetailsView } from '@/lib/views/details-view';

interface StateChangesProps {
  changes: DetailsView['changes'];
  onShow: (track: number, frame: number) => void;
}

const ROWS_MOST = 200;

/** Tracks within which a tracer was caught by a line, or came off one. */
export function StateChanges({ changes, onShow }: StateChangesProps) {
  if (changes.length === 0) return null;
  const captures = changes.filter(({ kind }) => kind === 'capture').length;
  const releases = changes.length - captures;
  const words = [
    captures > 0 ? countOf(captures, 'capture') : null,
    releases > 0 ? countOf(releases, 'release') : null,
  ].filter(Boolean);
  return (
    <Fold title={`${words.join(' and ')} within tracks`} className="pt-1">
      <p className="text-note text-ink-2">
        Such a track counts as free before a capture and as trapped after it, in every number and table.
      </p>
      <Table label="Changes of state within tracks" density="dense">
        <thead>
          <tr>
            <HeadCell>Track</HeadCell>
            <HeadCell>Change</HeadCell>
            <HeadCell numeric>Frame</HeadCell>
            <HeadCell numeric>ln odds</HeadCell>
            <HeadCell silent>In the frames</HeadCell>
          </tr>
        </thead>
        <tbody>
          {changes.slice(0, ROWS_MOST).map(({ track, kind, frame, lnOdds }) => (
            <Row key={`${track} ${frame}`}>
              <Cell head>{formatCount(track)}</Cell>
              <Cell>{kind}</Cell>
              <Cell numeric>{formatCount(frame)}</Cell>
              <Cell numeric>{lnOdds.toFixed(1)}</Cell>
              <Cell numeric>
                <button
                  type="button"
                  onClick={() => onShow(track, frame)}
                  aria-label={`Show the ${kind} of track ${track}`}
                  className="min-h-6 underline decoration-line-strong underline-offset-[3px] hover:decoration-violet"
                >
                  Show
                </button>
              </Cell>
            </Row>
          ))}
        </tbody>
      </Table>
    </Fold>
  );
}
