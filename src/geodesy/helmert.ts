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

/** A shift at one time: metres, radians, ratio. */
export interface HelmertAt {
  readonly t: Xyz;
  readonly r: Xyz;
  readonly scale: number;
}

/** The parameters at a time (decimal year). */
export function helmertAt(shift: Helmert, year: number): HelmertAt {
  const dt = year - shift.epoch;
  const at = (values: Xyz, rates: Xyz, axis: 0 | 1 | 2): number => values[axis] + rates[axis] * dt;
  const { translationM, translationRate, rotationMas, rotationRate } = shift;
  return {
    t: [at(translationM, translationRate, 0), at(translationM, translationRate, 1), at(translationM, translationRate, 2)],
    r: [at(rotationMas, rotationRate, 0) * MAS_RAD, at(rotationMas, rotationRate, 1) * MAS_RAD, at(rotationMas, rotationRate, 2) * MAS_RAD],
    scale: 1 + (shift.scalePpb + shift.scaleRate * dt) * 1e-9,
  };
}

/** Earth-centred metres from the shift's source frame to its target. Source: EPSG Guidance Note 7-2, method 1056. */
export function applyHelmert({ t, r, scale }: HelmertAt, [x, y, z]: Xyz): Xyz {
  const [rx, ry, rz] = r;
  return [
    t[0] + scale * (x + rz * y - ry * z),
    t[1] + scale * (-rz * x + y + rx * z),
    t[2] + scale * (ry * x - rx * y + z),
  ];
}

/** Each round leaves 1e-7 of the miss before it, so three from a metre reach 1e-21 m. */
const REVERSE_ROUNDS = 3;

/** The same shift backwards, exact to rounding: not with signs changed, which would leave the products of rotations. */
export function reverseHelmert(shift: HelmertAt, target: Xyz): Xyz {
  let source = target;
  for (let round = 0; round < REVERSE_ROUNDS; round++) {
    const forward = applyHelmert(shift, source);
    source = [source[0] + target[0] - forward[0], source[1] + target[1] - forward[1], source[2] + target[2] - forward[2]];
  }
  return source;
}
