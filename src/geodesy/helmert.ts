/** A time-dependent shift between earth-centred frames: value at its epoch and change a year. */
export interface Helmert {
  /** Metres; milliarc-seconds in the coordinate-frame sense; parts per billion. */
  readonly translationM: readonly [number, number, number];
  readonly rotationMas: readonly [number, number, number];
  readonly scalePpb: number;
  readonly translationRate: readonly [number, number, number];
  readonly rotationRate: readonly [number, number, number];
  readonly scaleRate: number;
  readonly epoch: number;
}

export type Xyz = readonly [number, number, number];

/** Source: EPSG:8970, ITRF2014 to NAD83(2011) (1), EPSG method 1056; joint derivation of Canada and the United States with IERS values. */
export const ITRF2014_TO_NAD83_2011: Helmert = {
  translationM: [1.0053, -1.9092, -0.5416], rotationMas: [26.7814, -0.4203, 10.9321], scalePpb: 0.37,
  translationRate: [0.0008, -0.0006, -0.0014], rotationRate: [0.0667, -0.7574, -0.0513], scaleRate: -0.07, epoch: 2010,
};

/** Source: EPSG:9991, ITRF2014 to ITRF2020 (1), IERS; it has no rotation. */
export const ITRF2014_TO_ITRF2020: Helmert = {
  translationM: [0.0014, 0.0009, -0.0014], rotationMas: [0, 0, 0], scalePpb: 0.42,
  translationRate: [0, 0.0001, -0.0002], rotationRate: [0, 0, 0], scaleRate: 0, epoch: 2015,
};

const MAS_RAD = Math.PI / 180 / 3600 / 1000;

/** Earth-centred metres at a time (decimal year) from the shift's source frame to its target. Source: EPSG Guidance Note 7-2, method 1056. */
export function applyHelmert(shift: Helmert, year: number, [x, y, z]: Xyz): Xyz {
  const dt = year - shift.epoch;
  const [tx, ty, tz] = shift.translationM.map((value, axis) => value + shift.translationRate[axis]! * dt) as [number, number, number];
  const [rx, ry, rz] = shift.rotationMas.map((value, axis) => (value + shift.rotationRate[axis]! * dt) * MAS_RAD) as [number, number, number];
  const scale = 1 + (shift.scalePpb + shift.scaleRate * dt) * 1e-9;
  return [
    tx + scale * (x + rz * y - ry * z),
    ty + scale * (-rz * x + y + rx * z),
    tz + scale * (ry * x - rx * y + z),
  ];
}

/** Each round leaves 1e-7 of the miss before it, so three from a metre reach 1e-21 m. */
const REVERSE_ROUNDS = 3;

/** The same shift backwards, exact to rounding: not with signs changed, which would leave the products of rotations. */
export function reverseHelmert(shift: Helmert, year: number, target: Xyz): Xyz {
  let source = target;
  for (let round = 0; round < REVERSE_ROUNDS; round++) {
    const forward = applyHelmert(shift, year, source);
    source = [source[0] + target[0] - forward[0], source[1] + target[1] - forward[1], source[2] + target[2] - forward[2]];
  }
  return source;
}
