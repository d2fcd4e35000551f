import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import type { TryOutView } from '@/lib/views/analysis-view';

const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;

interface TryAnswersProps {
  answer: TryOutView;
  shown: number;
  onFrame: (frame: number) => void;
}

/** What was found in each frame that was tried: the canvas in numbers, and the way to each frame. */
export function TryAnswers({ answer, shown, onFrame }: TryAnswersProps) {
  return (
    <Table label="Spots and noise per frame" density="dense">
      <thead>
        <tr>
          <HeadCell className="pl-2">Frame</HeadCell>
          <HeadCell numeric>Spots</HeadCell>
          <HeadCell numeric unit="e r.m.s.">
            Noise
          </HeadCell>
          <HeadCell numeric unit="of noise">
            Mean peak
          </HeadCell>
        </tr>
      </thead>
      <tbody>
        {answer.frames.map(({ frame, noise_e, spots }) => (
          <Row key={frame} selected={frame === shown}>
            <Cell head className="pl-2">
              <button
                type="button"
                onClick={() => onFrame(frame)}
                aria-label={`Show frame ${frame}`}
                aria-pressed={frame === shown}
                className="min-h-6 tabular-nums underline decoration-line-strong underline-offset-[3px] hover:decoration-violet"
              >
                {formatCount(frame)}
              </button>
            </Cell>
            <Cell numeric>{formatCount(spots.x.length)}</Cell>
            <Cell numeric>{noise_e.toPrecision(3)}</Cell>
            <Cell numeric>{spots.snr.length > 0 ? mean(spots.snr).toPrecision(2) : ''}</Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
