import type { DetailsView } from '@/lib/views/details-view';
import type { FlowDetails } from '@/tracking/flow-measures';

/** Stored details under the names and units of the API. */
export const detailsView = (details: FlowDetails): DetailsView => ({
  accelerations: details.accelerations.map((one) => ({
    population: one.population,
    component: one.component,
    lagFrames: one.lagFrames,
    lag_s: one.lagS,
    rms_m_s2: one.rmsMS2,
    low_m_s2: one.lowMS2,
    high_m_s2: one.highMS2,
    noise_m_s2: one.noiseMS2,
    excessKurtosis: one.excessKurtosis,
    samples: one.samples,
    tracks: one.tracks,
  })),
  comparisons: details.comparisons,
  overTime: overTimeView(details.overTime),
  profiles: details.profiles && profilesView(details.profiles),
  shape: details.shape && shapeView(details.shape),
  features: featuresView(details.features),
  changes: details.changes,
  segments: details.segments,
});

const overTimeView = ({
  timeS,
  trappedPerAreaM2,
  freePerAreaM2,
  densities,
  transient,
}: FlowDetails['overTime']): DetailsView['overTime'] => ({
  time_s: timeS,
  trapped_m2: trappedPerAreaM2,
  free_m2: freePerAreaM2,
  densities_m2: densities,
  transient: {
    ...transient,
    forms: transient.forms.map(({ ratePerS, ...form }) => ({ ...form, rate_per_s: ratePerS })),
    laws: transient.laws.map(({ halvingS, beginsBeforeS, ...law }) => ({
      ...law,
      halving_s: halvingS,
      beginsBefore_s: beginsBeforeS,
    })),
  },
});

const profilesView = (
  profiles: NonNullable<FlowDetails['profiles']>,
): NonNullable<DetailsView['profiles']> => ({
  place_m: profiles.placeM,
  fromWall: profiles.fromWall,
  width_m: profiles.widthM,
  freeAlong_m_s: profiles.freeAlongMS,
  trappedAlong_m_s: profiles.trappedAlongMS,
  spots_m2: profiles.spotsPerAreaM2,
  density_m2: profiles.densityM2,
  note: profiles.note,
});

const shapeView = (shape: NonNullable<FlowDetails['shape']>): NonNullable<DetailsView['shape']> => ({
  chains: shape.chains,
  longChains: shape.longChains,
  length_m: shape.lengthM,
  lengthPerArea_per_m: shape.lengthPerAreaM,
  spacing_m: shape.spacingM,
  order: shape.order,
  curvature: shape.curvature && {
    mean_per_m: shape.curvature.meanPerM,
    rms_per_m: shape.curvature.rmsPerM,
    chains: shape.curvature.chains,
    straight: shape.curvature.straight,
  },
  note: shape.note,
});

const featuresView = (features: FlowDetails['features']): DetailsView['features'] => ({
  judged: features.judged,
  track: features.track,
  population: features.population,
  pTrapped: features.pTrapped,
  along_m_s: features.alongMS,
  transverse_m_s: features.transverseMS,
  acceleration_m_s2: features.accelerationMS2,
  msdSlope: features.msdSlope,
});
