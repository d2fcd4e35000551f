import type { TableDefinition } from './column';
import { column } from './define-column';
import { intervalHigh, intervalLow, lag, populationName, value, valueUnit } from './shared-columns';

export const OVER_TIME: TableDefinition = {
  name: 'over-time',
  title: 'Over time',
  description:
    'Tracers per area and line density in windows of the recording. Bands hold chance alone; what all windows share shifts the whole curve.',
  key: ['quantity', 'method', 't_s'],
  columns: [
    column('quantity', 'text', '', 'line_density, trapped_tracers or free_tracers.'),
    column('method', 'text', '', 'How the line density was estimated; count for tracers.'),
    valueUnit,
    column('t_s', 'float64', 's', 'Middle of the window; 0 is frame 0.'),
    value,
    intervalLow,
    intervalHigh,
  ],
};

export const PROFILES: TableDefinition = {
  name: 'profiles',
  title: 'Profiles across the channel',
  description:
    'Mean quantities in strips along the flow. details.json says whether places are counted from a wall or from the middle of the image.',
  key: ['quantity', 'place_m'],
  columns: [
    column('quantity', 'text', '', 'free_along, trapped_along, spots or line_density.'),
    valueUnit,
    column('place_m', 'float64', 'm', 'Middle of the strip.'),
    value,
    intervalLow,
    intervalHigh,
  ],
};

export const ACCELERATIONS: TableDefinition = {
  name: 'accelerations',
  title: 'Accelerations',
  description: 'R.m.s. accelerations of each population at each lag, localization noise taken out.',
  key: ['population', 'component', 'lag_s'],
  columns: [
    populationName,
    column('component', 'text', '', 'Along image axes (x, y) or along and across the flow.'),
    column('lag_s', 'float64', 's', 'Time between neighbouring positions of the second difference.'),
    column('rms_m_s2', 'float64', 'm/s^2', 'R.m.s. acceleration; unknown where noise may be all of it.'),
    column('low_m_s2', 'float64', 'm/s^2', 'Lower end of its 95 % interval.'),
    column('high_m_s2', 'float64', 'm/s^2', 'Upper end of its 95 % interval.'),
    column('noise_m_s2', 'float64', 'm/s^2', 'Part of localization, taken out.'),
    column('excess_kurtosis', 'float64', '1', 'Excess kurtosis, noise included.'),
    column('samples', 'int32', '1', 'Samples.'),
    column('tracks', 'int32', '1', 'Tracks that they come from.'),
  ],
};

export const TAILS: TableDefinition = {
  name: 'velocity-tails',
  title: 'Tails of velocities',
  description:
    'Power laws of the tails of velocity distributions, density ~ v^-exponent, by maximum likelihood.',
  key: ['population', 'component', 'lag_s'],
  columns: [
    populationName,
    column('component', 'text', '', 'Component of the velocity.'),
    lag,
    column('exponent', 'float64', '1', 'Exponent of the density.'),
    column('exponent_low', 'float64', '1', 'Lower end of its 95 % interval.'),
    column('exponent_high', 'float64', '1', 'Upper end of its 95 % interval.'),
    column('from_m_s', 'float64', 'm/s', 'Where the tail begins.'),
    column('samples', 'int32', '1', 'Velocities in the tail.'),
    column('tracks', 'int32', '1', 'Tracks that they come from.'),
    column('verdict', 'text', '', 'What the tail is told to be.'),
  ],
};

export const CHANGES_OF_STATE: TableDefinition = {
  name: 'changes-of-state',
  title: 'Captures and releases',
  description: 'Where a tracer was caught by a line within its track, or came off one.',
  key: ['track', 'frame'],
  columns: [
    column('track', 'int32', '1', 'Number of the track.'),
    column('kind', 'text', '', 'capture or release.'),
    column('frame', 'int32', '1', 'First frame in the new state.'),
    column('ln_odds', 'float64', '1', 'Natural logarithm of the odds for the change.'),
  ],
};
