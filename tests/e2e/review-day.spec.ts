import { describe } from 'vitest';
import { reviewDay } from './support/review-day';
import { theyCorrect } from './support/they-correct';
import { theyJudge } from './support/they-judge';
import { theySignOff, theyWait } from './support/they-sign-off';

// One day of one laboratory on one analysis, in small: each part goes on from where the one before has ended.
reviewDay();

describe('three annotators', () => theyCorrect());
describe('in the quiet after', () => theyWait());
describe('candidates are judged', () => theyJudge());
describe('at the end of the day', () => theySignOff());
