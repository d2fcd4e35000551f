import { MarginNote } from '@/components/ui/margin-note';
import type { ExportFormat } from '@/lib/exports/export-facts';
import { countOf, formatCount } from '@/lib/format/count';

interface ContentsNoteProps {
  analyses: number;
  points: number;
  formats: readonly ExportFormat[];
  figures: boolean;
}

/** What the package will hold, as it is being put together. */
export function ContentsNote({ analyses, points, formats, figures }: ContentsNoteProps) {
  return (
    <MarginNote title="In the package">
      {analyses === 0 ? (
        <p>Nothing yet.</p>
      ) : (
        <ul className="list-none">
          <li>
            {countOf(analyses, 'analysis', 'analyses')}, {formatCount(points)} track points
          </li>
          <li>Tracks, velocities, distributions, spreading, candidates, estimates</li>
          <li>Corrections, judgements, conditions, recipes, code versions, SHA-256 of every recording</li>
          {formats.length > 0 ? <li>Tables as {formats.map((format) => NAMES[format]).join(', ')}</li> : null}
          {figures ? <li>Figures with their numbers, frames of reconnections</li> : null}
          <li>Data dictionary, Data Package, RO-Crate, checksums</li>
        </ul>
      )}
    </MarginNote>
  );
}

const NAMES: Record<ExportFormat, string> = { csv: 'CSV', hdf5: 'HDF5', parquet: 'Parquet', npz: 'NumPy' };
