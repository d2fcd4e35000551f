import { describe } from 'vitest';
import { everyPage, prepareLabs } from './support/every-page';

prepareLabs();

describe('every page in the light theme', () => everyPage('light'));
