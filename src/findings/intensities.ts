import type { Anomaly } from '../anomalies/types.js';

/** How densely sources lie that no record tells of, per hectare. */
export interface Intensities {
  /** Casings without a record. */
  readonly unrecorded: number;
  /** Sources that are no casings. */
  readonly others: number;
}

/** One unrecorded casing on ten hectares of an old field, believed as much as a search of five hectares would make one believe it (a working assumption). */
const UNRECORDED_PER_HA = 0.1;
/** A count's shape before anything was counted (Jeffreys' prior): a survey without any does not claim that there are none. */
const HALF_A_SOURCE = 0.5;

export interface IntensityInput {
  /** Open ground. */
  readonly hectares: number;
  /** Casings that the records make likely to be found: the sum of their chances of steel times detection. */
  readonly expected: number;
  /** What the user states stands. */
  readonly stated: { readonly unrecordedPerHa?: number; readonly othersPerHa?: number };
}

/**
 * Unsaid, both are counted from the survey itself. Others: the sum of what each anomaly lacks in being a casing.
 * Unrecorded casings: as many as the anomalies hold beyond what the records make likely, with a gamma prior of mean
 * UNRECORDED_PER_HA; records that could not be placed come in here, since their wells may be among them.
 *
 * Source: empirical Bayes for the rate of a Poisson process (Gelman et al. 2013, Bayesian Data Analysis, section 2.6).
 */
export function intensities(list: readonly Anomaly[], { hectares, expected, stated }: IntensityInput): Intensities {
  const casings = list.reduce((sum, { pCasing }) => sum + pCasing, 0);
  return {
    unrecorded: stated.unrecordedPerHa ?? (HALF_A_SOURCE + Math.max(0, casings - expected)) / (HALF_A_SOURCE / UNRECORDED_PER_HA + hectares),
    others: stated.othersPerHa ?? (HALF_A_SOURCE + list.length - casings) / Math.max(hectares, Number.MIN_VALUE),
  };
}
