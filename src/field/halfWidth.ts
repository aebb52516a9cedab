export type HalfWidthSource = 'pole' | 'dipole' | 'line';

/**
 * Depth of a source below the sensor in half-widths of its anomaly: the vertical field over a vertical source falls to
 * half its peak at one half-width from the middle. Handbooks round to 1.3, 2 and 2.
 *
 * With t = (half-width/depth)²: pole (1 + t)^(3/2) = 2; dipole 2 − t = (1 + t)^(5/2); horizontal line of vertical
 * dipoles 2(1 − t) = (1 + t)², so t = √5 − 2.
 *
 * Source: Breiner (1973), Applications Manual for Portable Magnetometers; Telford, Geldart & Sheriff (1990), ch. 3.
 */
export const HALF_WIDTH_FACTORS: Readonly<Record<HalfWidthSource, number>> = Object.freeze({
  pole: 1 / Math.sqrt(2 ** (2 / 3) - 1),
  // No closed root: t = 0.2506833582, by bisection.
  dipole: 1.997272158152342,
  line: 1 / Math.sqrt(Math.sqrt(5) - 2),
});

/** Depth below the sensor, metres, from the half-width at half the peak, metres. */
export function depthFromHalfWidth(source: HalfWidthSource, halfWidthM: number): number {
  return HALF_WIDTH_FACTORS[source] * halfWidthM;
}
