import { column } from './define-column';

export const populationName = column('population', 'text', '', 'trapped, free, undecided, or all.');
export const lag = column('lag_s', 'float64', 's', 'Time between the two positions.');
/** For tables of several quantities. */
export const valueUnit = column('unit', 'text', '', 'Unit of value, low and high.');
export const value = column('value', 'float64', 'as in column unit', 'The value.');
export const intervalLow = column('low', 'float64', 'as in column unit', 'Lower end of its 95 % interval.');
export const intervalHigh = column('high', 'float64', 'as in column unit', 'Upper end of its 95 % interval.');
