'use client';

import Link from 'next/link';
import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { RecipeFields } from '@/components/analyses/recipe-fields';
import { useRecipeForm } from '@/components/analyses/use-recipe-form';
import { useStartAnalysis } from '@/components/data/use-recording';
import { Button, ButtonLink } from '@/components/ui/button';
import { Fold } from '@/components/ui/fold';
import { ErrorState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';

interface StartAnalysisProps {
  recordingId: string;
  /** What the run lacks before anything can be measured; null when nothing. */
  missing: { sentence: string; href: string } | null;
}

/** A recipe, and the button that starts an analysis with it. */
export function StartAnalysis({ recordingId, missing }: StartAnalysisProps) {
  const form = useRecipeForm();
  const start = useStartAnalysis(recordingId);
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const [key, setKey] = useState(() => crypto.randomUUID());
  const [problem, setProblem] = useState<string | null>(null);
  const own = Object.keys(form.recipe ?? {}).length;

  const submit = () => {
    if (!form.recipe) {
      setOpen(true);
      return;
    }
    setProblem(null);
    start.mutate(
      { recipe: form.recipe, idempotencyKey: key },
      {
        onSuccess: ({ id }) => router.push(`/analyses/${id}`),
        onError: (error) => {
          setProblem(form.refuse(error));
          setOpen(true);
          // Another recipe is another request; the same one again keeps its key.
          if (!('status' in error) || error.status !== 0) setKey(crypto.randomUUID());
        },
      },
    );
  };

  return (
    <Section
      title="Start an analysis"
      count={own === 0 ? 'every value left to the machine' : `${own} values of your own`}
    >
      {missing ? (
        <p className="pb-2 text-note">
          {missing.sentence} <Link href={missing.href}>Enter it in the run</Link>
        </p>
      ) : null}
      <form
        noValidate
        onSubmit={(event) => {
          event.preventDefault();
          submit();
        }}
      >
        <Fold title="Recipe" open={open} onOpen={setOpen}>
          <div className="pt-2">
            <RecipeFields
              texts={form.texts}
              errors={form.errors}
              onText={form.setText}
              columns="grid-cols-2 desk:grid-cols-4"
            />
          </div>
        </Fold>
        {problem ? (
          <div className="pb-2">
            <ErrorState live what="The analysis did not start.">
              {problem}
            </ErrorState>
          </div>
        ) : null}
        <div className="flex flex-wrap gap-2 pt-2">
          <Button
            type="submit"
            kind="main"
            busy={start.isPending}
            disabled={missing !== null || form.recipe === null}
          >
            Start analysis
          </Button>
          <ButtonLink href={`/recordings/${recordingId}/try`}>Try on a few frames</ButtonLink>
          {own > 0 || form.recipe === null ? (
            <Button kind="bare" onClick={() => form.reset()}>
              All to auto
            </Button>
          ) : null}
        </div>
      </form>
    </Section>
  );
}
