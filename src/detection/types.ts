/** The casing that is looked for, as ranges that chances are averaged over. */
export interface Target {
  /** Pole strength of the casing's top, A·m, lowest and highest; log-uniform between them; either sign. */
  readonly poleAM: readonly [number, number];
  /** Depth of the casing's top below ground, metres, lowest and highest; uniform between them. */
  readonly depthM: readonly [number, number];
  /** Where the range comes from: as stated by the user, or from a casing size and a magnetisation range. */
  readonly basis: string;
}

/** Noise of the residual: white per reading, plus a correlated part (geology, position) that decays with distance. */
export interface NoiseModel {
  readonly whiteSdNT: number;
  readonly correlatedSdNT: number;
  readonly correlationM: number;
  /** Standard deviation of a position on each axis, metres, and the time over which it wanders. */
  readonly positionSdM: number;
  readonly positionCorrelationS: number;
}
