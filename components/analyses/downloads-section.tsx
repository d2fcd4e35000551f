import Link from 'next/link';
import { Section } from '@/components/ui/sheet';

const FILES = [
  { name: 'tracks.csv', holds: 'a row per track and frame: position, error, brightness, population' },
  { name: 'velocities.csv', holds: 'velocities at each lag' },
  { name: 'velocity-pdf.csv', holds: 'velocity distributions with their bands' },
  { name: 'reconnections.csv', holds: 'candidates with their fits' },
  { name: 'estimates.json', holds: 'line density and spacing by each method' },
];

interface DownloadsProps {
  analysisId: string;
  /** Why there is nothing to download yet; null when there is. */
  reason: string | null;
}

/** The five files of an analysis. */
export function DownloadsSection({ analysisId, reason }: DownloadsProps) {
  return (
    <Section title="Files">
      {reason ? (
        <p className="text-note text-ink-2">{reason}</p>
      ) : (
        <>
          <ul className="text-note">
            {FILES.map(({ name, holds }) => (
              <li key={name} className="py-[3px]">
                <a href={`/api/v1/analyses/${analysisId}/${name}`} download={name}>
                  {name}
                </a>
                <span className="text-ink-2"> {holds}</span>
              </li>
            ))}
          </ul>
          <p className="pt-1 text-note">
            <Link href={`/exports?analysis=${analysisId}`}>Put it in a data package</Link>
            <span className="text-ink-2"> with HDF5, Parquet, NumPy, figures, licence and contributors</span>
          </p>
        </>
      )}
    </Section>
  );
}
