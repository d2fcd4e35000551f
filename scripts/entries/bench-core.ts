import { chooseKernels } from '@/jobs/compute/kernels';
import { answerRounds } from '@/scripts/bench/core-process';
import { openStack } from '@/stacks/open-stack';

// One pipeline of the core in a process of its own: what another pipeline teaches the compilers must not
// slow this one down. `npm run bench` starts it.

const [stackDir, effort] = process.argv.slice(2);
if (effort !== 'full' && effort !== 'quick') throw new Error(`No effort is called '${effort}'.`);
const stack = await openStack(stackDir);
await answerRounds(stack, effort, chooseKernels());
