import { POPULATIONS } from '../types';

/** Codes of the populations, as arrays over tracks hold them. */
export const TRAPPED = POPULATIONS.indexOf('trapped');
export const FREE = POPULATIONS.indexOf('free');
export const UNDECIDED = POPULATIONS.indexOf('undecided');
