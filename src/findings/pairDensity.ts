import type { Anomaly } from '../anomalies/types.js';
import { areaM2 } from '../density/area.js';
import { massIn } from '../density/massIn.js';
import type { Covariance } from '../density/types.js';
import { normalCdf } from '../numerics/special.js';
import type { WellRecord } from '../records/types.js';

/** A Gaussian of a pair: density at the anomaly, 1/m², that follows a shift of the record. */
interface PairGaussian {
  /** Weight over normalisation, 1/m². */
  readonly height: number;
  /** From the record's part to the anomaly, metres. */
  readonly dx: number;
  readonly dy: number;
  /** Inverse covariance: east-east, east-north, north-north, 1/m². */
  readonly inverse: readonly [number, number, number];
}

/** How densely a record's well and an anomaly's source may lie in one place. */
export interface PairDensity {
  /** Parts that shift with the record's group; without a group they are all its Gaussians, at no shift. */
  readonly gaussians: readonly PairGaussian[];
  /** Blunders and spread-out parts, 1/m²: so wide that a shift of metres changes nothing. */
  readonly spread: number;
}

/** What a shared shift leaves of a variance must stay positive, m²: a centimetre. */
const LEAST_VARIANCE = 1e-4;

/**
 * Density of record and anomaly together, ∫ f(x) N(a; x, S) dx: the record's density f at the anomaly's place a, blurred
 * by the anomaly's own covariance S.
 *
 * @param sharedSdM What to take out of each Gaussian's variances, since its group's shift is followed by itself; 0 for none.
 */
export function pairDensity(record: WellRecord, anomaly: Anomaly, sharedSdM: number): PairDensity {
  const gaussians: PairGaussian[] = [];
  let spread = 0;
  for (const part of record.density.parts) {
    if (part.weight === 0) continue;
    if (part.kind === 'gaussian') {
      const own: Covariance = [Math.max(part.cov[0] - sharedSdM ** 2, LEAST_VARIANCE), part.cov[1], Math.max(part.cov[2] - sharedSdM ** 2, LEAST_VARIANCE)];
      const [ee, en, nn] = [own[0] + anomaly.cov[0], own[1] + anomaly.cov[1], own[2] + anomaly.cov[2]];
      const det = Math.max(ee * nn - en * en, LEAST_VARIANCE ** 2);
      gaussians.push({ height: part.weight / (2 * Math.PI * Math.sqrt(det)), dx: anomaly.x - part.x, dy: anomaly.y - part.y, inverse: [nn / det, -en / det, ee / det] });
    } else if (part.kind === 'disc') {
      spread += (part.weight * inDisc(Math.hypot(anomaly.x - part.x, anomaly.y - part.y), part.radiusM, anomaly.posSdM)) / (Math.PI * part.radiusM ** 2);
    } else {
      const blur: Covariance = part.cov ? [anomaly.cov[0] + part.cov[0], anomaly.cov[1] + part.cov[1], anomaly.cov[2] + part.cov[2]] : anomaly.cov;
      const blurred = { parts: [{ kind: 'gaussian', weight: 1, x: anomaly.x, y: anomaly.y, cov: blur, role: 'place' }] } as const;
      spread += (part.weight * massIn(blurred, part.area)) / areaM2(part.area);
    }
  }
  return { gaussians, spread };
}

/** Value of the shifting parts for a shift of the record by (east, north) metres, 1/m². */
export function shiftedDensity({ gaussians }: PairDensity, east: number, north: number): number {
  let sum = 0;
  for (const { height, dx, dy, inverse: [a, b, c] } of gaussians) {
    const x = dx - east;
    const y = dy - north;
    sum += height * Math.exp(-0.5 * (a * x * x + 2 * b * x * y + c * y * y));
  }
  return sum;
}

/** Share of a round Gaussian inside a disc that is wide against it: the edge is as good as straight. */
function inDisc(distanceM: number, radiusM: number, sdM: number): number {
  return sdM > 0 ? normalCdf((radiusM - distanceM) / sdM) : Number(distanceM <= radiusM);
}

/** Smallest standard deviation in any direction, metres, of the parts that shift; Infinity without one. */
export function narrowestSdM({ gaussians }: PairDensity): number {
  // The largest eigenvalue of the inverse is at most its trace.
  return gaussians.reduce((least, { inverse: [a, , c] }) => Math.min(least, 1 / Math.sqrt(a + c)), Infinity);
}
