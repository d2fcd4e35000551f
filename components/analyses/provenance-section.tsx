import Link from 'next/link';
import { Fold } from '@/components/ui/fold';
import { Moment } from '@/components/ui/moment';
import { Facts, Section } from '@/components/ui/sheet';
import { formatDuration } from '@/lib/format/duration';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { RecipeRequest } from '@/tracking/types';
import { recipeValueText, RECIPE_WORDS } from './recipe-words';

interface ProvenanceProps {
  analysis: AnalysisView;
  sha256: string | null;
}

/** Where every number of the page comes from. */
export function ProvenanceSection({ analysis, sha256 }: ProvenanceProps) {
  const { imageFacts, createdBy, startedAt, finishedAt } = analysis;
  const recipe = analysis.recipe as RecipeRequest;
  const tookS =
    startedAt && finishedAt ? (new Date(finishedAt).getTime() - new Date(startedAt).getTime()) / 1000 : null;
  return (
    <Section title="Where it comes from">
      <Facts
        items={[
          { name: 'Recipe', value: analysis.recipeName ?? 'unnamed recipe' },
          {
            name: 'Stack',
            value: (
              <>
                <Link href={`/recordings/${analysis.recordingId}`}>{analysis.recordingName}</Link>
                {sha256 ? (
                  <span className="block break-all text-small tabular-nums">SHA-256 {sha256}</span>
                ) : null}
              </>
            ),
          },
          { name: 'Code', value: analysis.codeVersion },
          {
            name: startedAt ? 'Started' : 'Asked for',
            value: (
              <>
                <Moment at={startedAt ?? analysis.createdAt} />
                {createdBy ? ` by ${createdBy.name}` : null}
                {tookS !== null ? `, took ${formatDuration(tookS)}` : null}
              </>
            ),
          },
          ...(imageFacts
            ? [
                {
                  name: 'Image',
                  value: `${short(imageFacts.gainCountsPerE)} counts per electron, read noise ${short(imageFacts.readNoiseE)} e, offset ${short(imageFacts.offsetCounts)} counts, spot size ${short(imageFacts.spotSigmaPx)} px${differing(imageFacts.spotSigmaSpreadPx)}, ${imageFacts.badPixels} bad pixels`,
                },
              ]
            : []),
        ]}
      />
      <Fold title="The recipe, every value" className="pt-2">
        <Facts
          items={RECIPE_WORDS.map((word) => ({
            name: word.label,
            value: [recipeValueText(word, recipe[word.field]), word.unit].filter(Boolean).join(' '),
          }))}
        />
      </Fold>
    </Section>
  );
}

const short = (value: number) => String(Number(value.toPrecision(3)));

/** Words where tracers differ so much in size that each is fitted with its own. */
const differing = (spreadPx?: number) =>
  spreadPx === undefined
    ? ''
    : `, ${short(spreadPx)} px more or less from tracer to tracer (each is fitted with its own)`;
