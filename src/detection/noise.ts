import type { NoiseModel } from './types.js';

/**
 * Noise to plan with, before anything was measured: a caesium or potassium magnetometer carried on foot over quiet soil,
 * satellite positions without a base (common practice). A survey is judged by its own residual, not by this.
 */
export const PLANNING_NOISE: NoiseModel = Object.freeze({
  whiteSdNT: 0.5, correlatedSdNT: 3, correlationM: 20, positionSdM: 0.3, positionCorrelationS: 60,
});

/** No instrument in the field does better on one reading, nT; it also keeps a covariance without noise invertible. */
export const LEAST_WHITE_NT = 0.01;
