import type { Comparison } from './compare';
import { timesOf } from './report';
import { mostGrowth, type MemoryRun } from './memory-run';
import { gainOf, type WorkersRun } from './workers-run';

/** What the bench aims at. Misses are printed, not failed: clocks of a busy machine prove nothing. */
const GOALS = { fullTimes: 10, quickTimes: 30, workersGain: 1.7, growthMB: 100 } as const;

/** A line for each goal of speed: how far it is reached, beside both scripts. */
export function speedGoals({ recording, full, quick, plainScript, tunedScript }: Comparison): string[] {
  if (!plainScript || !tunedScript) return [];
  const line = (effort: string, run: typeof full, goal: number) => {
    const times = timesOf(run, plainScript);
    return (
      `${recording.name}: ${effort} effort ${times.toFixed(1)} times the script on SciPy ` +
      `(goal ${goal}, ${reached(times >= goal)}), ${timesOf(run, tunedScript).toFixed(1)} times the tuned one.`
    );
  };
  return [line('full', full, GOALS.fullTimes), line('quick', quick, GOALS.quickTimes)];
}

export function workersGoal(one: WorkersRun, two: WorkersRun): string {
  const { whole, detection, replayed } = gainOf(one, two);
  return (
    `${one.stack.name}: two workers ${whole.toFixed(2)} times one, warm (goal ${GOALS.workersGain} on idle cores, ` +
    `${reached(whole >= GOALS.workersGain)}); detection alone ${detection.toFixed(2)} times; ` +
    `by processor time, nobody waiting, ${replayed.toFixed(2)} times; ` +
    `load average ${one.load.toFixed(1)} and ${two.load.toFixed(1)}.`
  );
}

/** How far a process grows, and how much more of it a ten times longer stack needs. */
export function memoryGoal(runs: readonly MemoryRun[]): string {
  const most = Math.max(...runs.map(mostGrowth));
  const [short, long] = runs.map(({ growthMB }) => growthMB['detect-spots']);
  const flat =
    long === undefined ? '' : ` Detection grows by ${(long - short).toFixed(0)} MB more in the long stack.`;
  return `Memory: a process grows by ${most.toFixed(0)} MB at most (goal ${GOALS.growthMB}, ${reached(most < GOALS.growthMB)}).${flat}`;
}

const reached = (yes: boolean) => (yes ? 'reached' : 'missed');
