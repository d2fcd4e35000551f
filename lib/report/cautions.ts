import type { CompareView } from '../views/compare-view';

interface Told {
  about: string;
  words: string;
}

/** What a reader of a report must know, most of it in the words of the kernels: plans, estimates, people. */
export function reportCautions(
  { runs }: Pick<CompareView, 'runs'>,
  planned: readonly { name: string; warnings: readonly string[] }[],
  analyses: readonly {
    runName: string;
    stale: boolean;
    estimates: readonly { method: string; value: number | null; note: string }[];
  }[],
): Told[] {
  const told: Told[] = [];
  for (const { runName, exclusion, analysisId, events } of runs) {
    if (exclusion)
      told.push({ about: runName, words: `Left out of fits by ${exclusion.by}: ${exclusion.reason}` });
    if (!analysisId) told.push({ about: runName, words: 'No analysis of it is done.' });
    if (events && events.judged < events.candidates) {
      told.push({ about: runName, words: `${events.candidates - events.judged} of ${events.candidates} reconnection candidates are not judged yet, so the rate of events may rise.` }); // prettier-ignore
    }
  }
  for (const { runName, stale, estimates } of analyses) {
    if (stale)
      told.push({ about: runName, words: 'Its results are older than the corrections of its tracks.' });
    const combined = estimates.find(({ method }) => method === 'combined');
    if (combined && combined.value === null && combined.note)
      told.push({ about: runName, words: combined.note });
  }
  for (const { name, warnings } of planned) for (const words of warnings) told.push({ about: name, words });
  return together(told);
}

/** What is said of several runs alike is said once, with all their names. */
function together(told: readonly Told[]): Told[] {
  const byWords = new Map<string, string[]>();
  for (const { about, words } of told) {
    const names = byWords.get(words) ?? [];
    if (!names.includes(about)) byWords.set(words, [...names, about]);
  }
  return [...byWords].map(([words, names]) => ({ about: names.join(', '), words }));
}
