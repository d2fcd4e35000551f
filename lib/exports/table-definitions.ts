import { POPULATIONS } from '@/tracking/types';
import type { TableDefinition } from './column';
import { ACCELERATIONS, CHANGES_OF_STATE, OVER_TIME, PROFILES, TAILS } from './detail-definitions';
import { column } from './define-column';
import { intervalHigh, intervalLow, lag, populationName, value, valueUnit } from './shared-columns';

const track = column('track', 'int32', '1', 'Number of the track, from 0 in order of first frame, then y, then x; corrected tracks keep their number or get a new one.'); // prettier-ignore
const frame = column('frame', 'int32', '1', 'Frame, from 0.');
const time = column('t_s', 'float64', 's', 'Time; 0 is frame 0.');
const population = column('population', 'code', '', 'Trapped on a vortex line, free, or undecided.', POPULATIONS); // prettier-ignore
const component = (what: string) => column('component', 'text', '', `${what} along image axes (x, y) or along and across the flow.`); // prettier-ignore
const low = (unit: string) => column('low', 'float64', unit, 'Lower end of the 95 % band from resampling whole tracks.'); // prettier-ignore
const high = (unit: string) => column('high', 'float64', unit, 'Upper end of the same band.');

export const TRACKS: TableDefinition = {
  name: 'tracks',
  title: 'Tracks',
  description:
    'A row per track and frame. Image axes: x to the right, y down, the centre of the top left pixel is (0, 0). In a bridged frame the tracer was missed: the position is interpolated and has no errors and no brightness.',
  key: ['track', 'frame'],
  columns: [
    track,
    frame,
    time,
    column('x_px', 'float32', 'px', 'Position to the right.'),
    column('y_px', 'float32', 'px', 'Position down.'),
    column('x_m', 'float64', 'm', 'The same in metres.'),
    column('y_m', 'float64', 'm', 'The same in metres.'),
    column('sx_px', 'float32', 'px', 'Standard error of x; unknown where the position is interpolated.'),
    column('sy_px', 'float32', 'px', 'Standard error of y; unknown where the position is interpolated.'),
    column('brightness', 'float32', 'photoelectrons', 'Light of the tracer in this frame.'),
    population,
    column('p_trapped', 'float32', '1', 'Probability that the track is trapped.'),
  ],
};

export const VELOCITIES: TableDefinition = {
  name: 'velocities',
  title: 'Velocities',
  description:
    'Mean velocity of a track over each lag, for every pair of measured positions. frame and t_s are the start of the interval. Rows that share a position are correlated.',
  key: ['track', 'frame', 'lag_frames'],
  columns: [
    track,
    frame,
    time,
    column('lag_frames', 'int32', '1', 'Frames between the two positions.'),
    column('vx_m_s', 'float64', 'm/s', 'Velocity to the right.'),
    column('vy_m_s', 'float64', 'm/s', 'Velocity down.'),
    column('svx_m_s', 'float64', 'm/s', 'Standard error of vx from the errors of both positions.'),
    column('svy_m_s', 'float64', 'm/s', 'Standard error of vy from the errors of both positions.'),
    population,
  ],
};

export const VELOCITY_PDF: TableDefinition = {
  name: 'velocity-pdf',
  title: 'Velocity distributions',
  description: 'A row per bin of each velocity distribution. The integral of each density is 1.',
  key: ['population', 'component', 'lag_s', 'bin_low_m_s'],
  columns: [
    populationName,
    component('Velocity'),
    lag,
    column('bin_low_m_s', 'float64', 'm/s', 'Lower edge of the bin.'),
    column('bin_high_m_s', 'float64', 'm/s', 'Upper edge of the bin.'),
    column('count', 'int32', '1', 'Velocities in the bin.'),
    column('density_s_m', 'float64', 's/m', 'Probability density.'),
    column('density_low', 'float64', 's/m', 'Lower end of the 95 % band from resampling whole tracks.'),
    column('density_high', 'float64', 's/m', 'Upper end of the same band.'),
  ],
};

export const VELOCITY_KERNEL: TableDefinition = {
  name: 'velocity-kernel',
  title: 'Velocity distributions by kernels',
  description:
    'A row per place of each kernel estimate of a velocity distribution, which is straight between its places. The integral of each density is 1.',
  key: ['population', 'component', 'lag_s', 'velocity_m_s'],
  columns: [
    populationName,
    component('Velocity'),
    lag,
    column('velocity_m_s', 'float64', 'm/s', 'Place of the curve.'),
    column('density_s_m', 'float64', 's/m', 'Probability density there.'),
    column('width_m_s', 'float64', 'm/s', 'Standard deviation of the Gaussian kernel where samples are dense; it widens where they are rare.'), // prettier-ignore
    column('told', 'int32', '1', '0 among the ten outermost samples (of fewer than a hundred: a tenth) at either end, where the curve has the shape of their kernels; else 1.'), // prettier-ignore
  ],
};

export const RECONNECTIONS: TableDefinition = {
  name: 'reconnections',
  title: 'Candidates for reconnections',
  description: 'Pairs of tracks that meet and part, with the fits of delta(t) = A (kappa |t - t0|)^(1/2).',
  key: ['event'],
  columns: [
    column('event', 'int32', '1', 'Number of the candidate.'),
    column('track_a', 'int32', '1', 'One track.'),
    column('track_b', 'int32', '1', 'The other track.'),
    column('t0_s', 'float64', 's', 'When they meet.'),
    column('x_px', 'float64', 'px', 'Where they meet.'),
    column('y_px', 'float64', 'px', 'Where they meet.'),
    column('min_separation_m', 'float64', 'm', 'Least separation that was measured.'),
    column('amplitude_before', 'float64', '1', 'A before the meeting.'),
    column('amplitude_after', 'float64', '1', 'A after the meeting.'),
    column('exponent_before', 'float64', '1', 'Exponent before, fitted freely; 0.5 is the law.'),
    column('exponent_after', 'float64', '1', 'Exponent after, fitted freely.'),
    column('p_chance', 'float64', '1', 'Chance of such an approach between independent tracks.'),
    column('q_value', 'float64', '1', 'False discovery rate at which the candidate is accepted.'),
    column('verdict', 'text', '', 'What people decided: yes, no, cannot-tell; empty while nobody has.'),
  ],
};

export const ESTIMATES: TableDefinition = {
  name: 'estimates',
  title: 'Estimates',
  description:
    'Line density and line spacing by each method, with intervals. A method that cannot be used has no value, and its note says why.',
  key: ['quantity', 'method'],
  columns: [
    column('quantity', 'text', '', 'line_density or line_spacing.'),
    valueUnit,
    column('method', 'text', '', 'How it was estimated.'),
    value,
    intervalLow,
    intervalHigh,
    column('level', 'float64', '1', 'Coverage of the interval.'),
    column('note', 'text', '', 'Assumptions, or why there is no value.'),
  ],
};

export const DISPLACEMENTS: TableDefinition = {
  name: 'mean-squared-displacement',
  title: 'Mean squared displacement',
  description: 'Spreading of each population, localization noise taken out.',
  key: ['population', 'component', 'lag_s'],
  columns: [
    populationName,
    column('component', 'text', '', 'Along x, y, along or across the flow, or the total of both axes.'),
    lag,
    column('value_m2', 'float64', 'm^2', 'Mean squared displacement.'),
    low('m^2'),
    high('m^2'),
  ],
};

export const AUTOCORRELATIONS: TableDefinition = {
  name: 'velocity-autocorrelation',
  title: 'Velocity autocorrelation',
  description: 'C(lag) / C(0) of each population, localization noise taken out.',
  key: ['population', 'component', 'lag_s'],
  columns: [populationName, component('Velocity'), lag, column('value', 'float64', '1', 'C(lag) / C(0).'), low('1'), high('1')], // prettier-ignore
};

export { ACCELERATIONS, CHANGES_OF_STATE, OVER_TIME, PROFILES, TAILS };

/** Tables of each analysis in a package, in order. */
export const ANALYSIS_TABLES: readonly TableDefinition[] = [
  TRACKS,
  VELOCITIES,
  VELOCITY_PDF,
  VELOCITY_KERNEL,
  DISPLACEMENTS,
  AUTOCORRELATIONS,
  ACCELERATIONS,
  TAILS,
  OVER_TIME,
  PROFILES,
  CHANGES_OF_STATE,
  RECONNECTIONS,
  ESTIMATES,
];
