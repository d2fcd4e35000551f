import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { CarryReport } from '@/lib/views/correction-view';

/** Corrections that could not be carried, with the reason for each. */
export function LeftTable({ left }: Pick<CarryReport, 'left'>) {
  return (
    <Table label="Corrections that are not carried" density="dense">
      <thead>
        <tr>
          <HeadCell>Revision there</HeadCell>
          <HeadCell>Not carried, and why</HeadCell>
        </tr>
      </thead>
      <tbody>
        {left.map(({ correction, words, reason }) => (
          <Row key={correction.id}>
            <Cell quiet>{correction.revision}</Cell>
            <Cell>
              {correction.by?.name ?? 'Somebody'} {words}
              <CellNote>{reason}</CellNote>
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
