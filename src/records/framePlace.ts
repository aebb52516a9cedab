import type { Covariance, HalfAxes } from '../density/types.js';
import type { Crs, DatumShift } from '../geodesy/types.js';
import type { RawPlace } from './rawRecord.js';

/** A place in the frame, and how far a digit of its coordinates reaches there. */
export interface FramePlace {
  readonly x: number;
  readonly y: number;
  /** Covariance of the rounding of the digits given, m². */
  readonly rounding: Covariance;
  /** Half a digit along each of the coordinates' own axes, frame metres. */
  readonly halfDigits: HalfAxes;
  /** Rounding along the axes of the coordinates as given, metres, one σ. */
  readonly roundingEastM: number;
  readonly roundingNorthM: number;
  readonly shift: string;
  readonly sdM: number;
  readonly sharedSdM: number;
}

/** Step of the differences that give metres per degree, about a metre: far above rounding, far below any curvature. */
const STEP_DEG = 1e-5;
const STEP_M = 1;

/** Longitude and latitude of coordinates as given, on their own datum; `crs` where they are projected. */
function lonLatOf(place: RawPlace, crs: Crs | null): [lonDeg: number, latDeg: number] {
  return place.kind === 'angles' ? [place.lonDeg, place.latDeg] : crs!.inverse(place.eastM, place.northM);
}

/**
 * Moves coordinates as given into the frame. Rounding is uniform within one unit of the last digit, so its standard
 * deviation is the unit ÷ √12 along each of the coordinates' own axes, carried to the frame by differences of the whole path.
 */
export function framePlace(place: RawPlace, ways: { readonly crs: Crs | null; readonly shift: DatumShift; readonly frame: Crs }): FramePlace {
  const { crs, shift, frame } = ways;
  const [lon, lat] = lonLatOf(place, crs);
  const moved = shift.place(lon, lat);
  // Within a metre the shift is one and the same, so the differences need only the projection.
  const forward = (toLon: number, toLat: number): [number, number] => frame.forward(toLon + moved.lonDeg - lon, toLat + moved.latDeg - lat);
  const at = (east: number, north: number): [number, number] =>
    place.kind === 'angles' ? forward(lon + east, lat + north) : forward(...crs!.inverse(place.eastM + east, place.northM + north));
  const step = place.kind === 'angles' ? STEP_DEG : STEP_M;
  const [eastDigit, northDigit] = place.kind === 'angles'
    ? [place.lonResolutionDeg, place.latResolutionDeg] : [place.eastResolutionM, place.northResolutionM];
  const [x, y] = frame.forward(moved.lonDeg, moved.latDeg);
  const alongEast = spread(at(-step, 0), at(step, 0), eastDigit / (2 * step));
  const alongNorth = spread(at(0, -step), at(0, step), northDigit / (2 * step));
  return {
    x, y,
    rounding: [
      alongEast[0] ** 2 + alongNorth[0] ** 2,
      alongEast[0] * alongEast[1] + alongNorth[0] * alongNorth[1],
      alongEast[1] ** 2 + alongNorth[1] ** 2,
    ],
    halfDigits: [scaled(alongEast, Math.sqrt(3)), scaled(alongNorth, Math.sqrt(3))],
    roundingEastM: Math.hypot(...alongEast), roundingNorthM: Math.hypot(...alongNorth),
    shift: moved.shift, sdM: moved.sdM, sharedSdM: moved.sharedSdM,
  };
}

function scaled([east, north]: readonly [number, number], factor: number): [number, number] {
  return [east * factor, north * factor];
}

/** One σ of a uniform digit as a vector in the frame: the difference of two places, scaled to one digit, over √12. */
function spread(from: readonly [number, number], to: readonly [number, number], scale: number): [number, number] {
  const factor = scale / Math.sqrt(12);
  return [(to[0] - from[0]) * factor, (to[1] - from[1]) * factor];
}
