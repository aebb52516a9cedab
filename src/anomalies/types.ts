import type { Area, Covariance } from '../density/types.js';
import type { NoiseModel } from '../detection/types.js';

export type AnomalyClass = 'casing' | 'linear' | 'compact' | 'unresolved';

/** A source that the readings tell of. Frame metres; depth below ground. */
export interface Anomaly {
  readonly anomalyId: string;
  readonly class: AnomalyClass;
  /** Chance that the source is the top of a casing. */
  readonly pCasing: number;
  readonly x: number;
  readonly y: number;
  readonly cov: Covariance;
  readonly semiMajM: number;
  readonly semiMinM: number;
  readonly azimDeg: number;
  readonly posSdM: number;
  /** Largest residual, by magnitude and with its sign, of the readings that the source explains, nT. */
  readonly peakNT: number;
  /** Deflection d of the fitted source. */
  readonly snr: number;
  readonly depthM: number;
  readonly depthSdM: number;
  /** Pole strength as −m, A·m: positive where the top attracts; NaN for a source that is no pole. */
  readonly poleAM: number;
  readonly poleSdAM: number;
  /** Magnitude of the dipole moment, A·m²; NaN for a source that is no dipole. */
  readonly momentAM2: number;
  /** Direction of a linear source, degrees in [0, 180) clockwise from grid north; NaN where it has none. */
  readonly strikeDeg: number;
  readonly outline: Area;
  readonly areaM2: number;
  /** Why it has its class, in words. */
  readonly note: string;
}

export interface Anomalies {
  readonly list: readonly Anomaly[];
  readonly noise: NoiseModel;
  readonly notes: readonly string[];
}
