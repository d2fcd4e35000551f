import { describe } from 'vitest';
import { eachRoleLooks, everyPage, prepareLabs } from './support/every-page';

prepareLabs();

describe('every page in the dark theme', () => everyPage('dark'));

describe('every page on a phone', () => eachRoleLooks('fits its window', 'light', 'narrow'));
