import { Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { countOf } from '@/lib/format/count';
import type { AssessmentView } from '@/lib/views/rehearsal-view';

/** What follows from the numbers, in sentences; what stands in the way first. */
export function AdviceSection({ advice }: { advice: AssessmentView['advice'] }) {
  const changes = advice.filter(({ weight }) => weight === 'change').length;
  return (
    <Section
      title="What follows"
      count={changes > 0 ? `${countOf(changes, 'thing')} to change` : 'nothing stands in the way'}
      flush
    >
      {advice.length === 0 ? (
        <p className="py-2">
          Under these conditions the recipe recovers what went in: nothing has to be changed.
        </p>
      ) : (
        <dl className="border-t border-ink">
          {advice.map(({ about, weight, sentence }, i) => (
            <div
              key={i}
              className="grid gap-x-5 border-b border-line py-[6px] hand:grid-cols-[150px_minmax(0,1fr)]"
            >
              <dt className={weight === 'change' ? 'font-strong' : 'text-ink-2'}>
                <StateWord state={weight === 'change' ? 'warning' : 'waiting'}>{about}</StateWord>
              </dt>
              <dd className="max-w-[92ch] text-pretty">{sentence}</dd>
            </div>
          ))}
        </dl>
      )}
    </Section>
  );
}
