import type { Random } from '../numerics/random.js';
import type { OpenPiece } from './openLines.js';
import type { Scenario, Track } from './types.js';
import { Wander } from './wander.js';

/** A walker corrects the course within this time; speed and height drift more slowly (common practice, from watching). */
const SWAY_CORRELATION_S = 8;
const SPEED_CORRELATION_S = 20;
const HEIGHT_CORRELATION_S = 4;
/** Steps a second of a walker, and the share of the sway and of the bob that keeps time with them (from memory). */
const STEPS_HZ = 1.8;
const GAIT_SHARE = 0.3;
/** A walk around a corner is longer than the straight line. */
const DETOUR = 1.2;

export interface WalkInput {
  readonly scenario: Scenario;
  readonly pieces: readonly OpenPiece[];
  readonly startS: number;
  readonly random: Random;
  /** Whether readings are kept at a place. */
  readonly keep: (x: number, y: number) => boolean;
}

/**
 * Walks the pieces one after the other at the stated rate. The true path sways about the line and the sensor bobs;
 * the recorded position has an error of its own that wanders slowly and goes on wandering during the turns.
 */
export function walk({ scenario, pieces, startS, random, keep }: WalkInput): Track {
  const { lines, walk: gait, position } = scenario;
  const slow = Math.sqrt(1 - GAIT_SHARE * GAIT_SHARE);
  const sway = new Wander(random.fork('sway'), gait.sway_m * slow, SWAY_CORRELATION_S);
  const height = new Wander(random.fork('height'), gait.bob_m * slow, HEIGHT_CORRELATION_S);
  const speed = new Wander(random.fork('speed'), gait.speed_variation, SPEED_CORRELATION_S);
  const yaw = new Wander(random.fork('yaw'), gait.yaw_deg, SWAY_CORRELATION_S);
  const errorX = new Wander(random.fork('error east'), position.sd_m, position.correlation_s);
  const errorY = new Wander(random.fork('error north'), position.sd_m, position.correlation_s);
  const white = random.fork('white position');
  const phase = random.fork('gait').uniform() * 2 * Math.PI;
  const tickS = 1 / lines.rate_hz;

  const rows: number[][] = [];
  let tick = 0;
  let from: readonly [number, number] | null = null;
  for (const piece of pieces) {
    if (from) {
      const turnS = gait.turn_s + DETOUR * Math.hypot(piece.x0 - from[0], piece.y0 - from[1]) / lines.speed_m_s;
      const ticks = Math.ceil(turnS / tickS);
      tick += ticks;
      for (const wander of [sway, height, speed, yaw, errorX, errorY]) wander.step(ticks * tickS);
    }
    const lengthM = Math.hypot(piece.x1 - piece.x0, piece.y1 - piece.y0);
    const ux = (piece.x1 - piece.x0) / lengthM;
    const uy = (piece.y1 - piece.y0) / lengthM;
    const courseDeg = Math.atan2(ux, uy) * 180 / Math.PI;
    for (let d = 0; d <= lengthM; tick++) {
      const step = 2 * Math.PI * STEPS_HZ * tick * tickS + phase;
      // Two steps make one swing from side to side and back; the hip rises with each step.
      const side = sway.step(tickS) + gait.sway_m * GAIT_SHARE * Math.SQRT2 * Math.sin(step / 2);
      const up = height.step(tickS) + gait.bob_m * GAIT_SHARE * Math.SQRT2 * Math.sin(step);
      const metresPerS = lines.speed_m_s * Math.max(0.3, 1 + speed.step(tickS));
      const x = piece.x0 + ux * d + uy * side;
      const y = piece.y0 + uy * d - ux * side;
      const lagM = metresPerS * position.lag_s;
      const ex = errorX.step(tickS) + position.white_m * white.normal() - ux * lagM;
      const ey = errorY.step(tickS) + position.white_m * white.normal() - uy * lagM;
      const heading = courseDeg + yaw.step(tickS);
      if (keep(x, y)) {
        rows.push([startS + tick * tickS, x, y, Math.max(0.2, lines.sensor_height_m + up), x + ex, y + ey, heading, piece.line]);
      }
      d += metresPerS * tickS;
    }
    from = [piece.x1, piece.y1];
  }
  const column = (k: number): Float64Array => Float64Array.from(rows, (row) => row[k]!);
  return {
    count: rows.length, timeS: column(0), x: column(1), y: column(2), heightM: column(3),
    recordedX: column(4), recordedY: column(5), yawDeg: column(6), line: Int32Array.from(rows, (row) => row[7]!),
  };
}
