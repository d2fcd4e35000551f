import { Section } from '@/components/ui/sheet';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { countOf, formatCount } from '@/lib/format/count';
import type { AssessmentView } from '@/lib/views/rehearsal-view';
import { percentText } from './share-text';

/** Scores of tracks against the true ones. */
export function TrackScoresSection({ tracks }: { tracks: AssessmentView['tracks'] }) {
  const two = (value: number | null) => (value === null ? null : value.toFixed(3));
  const rows: [name: string, what: string, value: string | null][] = [
    ['α', 'how much of the true tracks is followed', two(tracks.alpha)],
    ['β', 'the same, less what false tracks add', two(tracks.beta)],
    ['Positions in common', 'found and true, over all', two(tracks.jaccard)],
    ['Tracks in common', 'paired ones, over all', two(tracks.jaccardTracks)],
    ['Distance', 'r.m.s. of paired positions, px', two(tracks.rmsePx)],
    ['Wrong links', 'joins of different tracers', tracks.wrongLinkShare === null ? null : percentText(tracks.wrongLinkShare)], // prettier-ignore
    ['Tracks per tracer', 'more than 1: broken tracks', tracks.tracksPerTracer?.toFixed(2) ?? null],
  ];
  return (
    <Section
      flush
      title="Tracks"
      count={`${formatCount(tracks.tracks)} tracks of ${countOf(tracks.trueTracks, 'tracer')}`}
    >
      <Table label="Scores of tracks" density="dense">
        <thead>
          <tr>
            <HeadCell>Score</HeadCell>
            <HeadCell narrow="hide">What it says</HeadCell>
            <HeadCell numeric>Value</HeadCell>
          </tr>
        </thead>
        <tbody>
          {rows.map(([name, what, value]) => (
            <Row key={name}>
              <Cell head>{name}</Cell>
              <Cell quiet narrow="hide">
                {what}
              </Cell>
              <Cell numeric>{value ?? <Unknown />}</Cell>
            </Row>
          ))}
        </tbody>
      </Table>
      <p className="pt-2 text-note text-ink-2">
        After Chenouard et al., Nat. Methods 11, 281 (2014), gate 5 px; all but the last three are 1 at best.
      </p>
    </Section>
  );
}

const Unknown = () => <span className="text-ink-3">not known</span>;

const NAMES = ['trapped', 'free', 'undecided'] as const;
const KINDS = [
  { key: 'trapped', words: 'sits on a line' },
  { key: 'free', words: 'is free' },
  { key: 'nothing', words: 'is no known tracer' },
] as const;

/** What tracks follow (rows) and what they are called (columns). */
export function PopulationTable({ populations }: { populations: AssessmentView['populations'] }) {
  const { balancedAccuracy, undecidedShare } = populations;
  const words =
    balancedAccuracy === null
      ? 'Not both kinds are decided on: no accuracy can be told.'
      : `Of the decided tracks ${percentText(balancedAccuracy)} are named rightly (mean of both kinds); ${percentText(undecidedShare)} are left undecided.`;
  return (
    <Section flush title="Populations" count="tracks by what they follow and what they are called">
      <Table label="Populations: what tracks follow and what they are called" density="dense">
        <thead>
          <tr>
            <HeadCell>The tracer</HeadCell>
            {NAMES.map((name) => (
              <HeadCell key={name} numeric>
                called {name}
              </HeadCell>
            ))}
          </tr>
        </thead>
        <tbody>
          {KINDS.map(({ key, words: kind }) => (
            <Row key={key}>
              <Cell head>{kind}</Cell>
              {NAMES.map((name) => (
                <Cell key={name} numeric className={key === name ? 'font-strong' : ''}>
                  {formatCount(populations[key][name])}
                </Cell>
              ))}
            </Row>
          ))}
        </tbody>
      </Table>
      <p className="pt-2 text-note text-ink-2">{words}</p>
    </Section>
  );
}
