import { Random } from '../../../src/numerics/random.js';

/**
 * A made survey for judging grids: lines over collar poles, dipoles and smooth geology, and the exact total field at any
 * place. It has formulas of its own and shares none with the program.
 */
export interface MadeSurveyOptions {
  readonly seed: number;
  readonly spacingM: number;
  /** Of the shallowest sources below the sensor. */
  readonly depthM: number;
  readonly noiseNT: number;
  /** Largest departure of the sensor from the level, metres; it wanders slowly along the line. */
  readonly bobM?: number;
  /** Direction of the lines, clockwise from north. */
  readonly azimuthDeg?: number;
  readonly lines?: number;
}

export interface MadeSurvey {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Sensor above the level, metres. */
  readonly up: Float64Array;
  readonly line: Int32Array;
  readonly value: Float64Array;
  /** Exact total-field anomaly at a place, and a height above the level. */
  readonly field: (x: number, y: number, up?: number) => number;
}

interface Pole { readonly x: number; readonly y: number; readonly up: number; readonly m: number }
interface Dipole extends Omit<Pole, 'm'> { readonly m: readonly [number, number, number] }
interface Wave { readonly kx: number; readonly ky: number; readonly phase: number; readonly nT: number }

const MAIN_NT = 52_000;
const INCLINATION = (66 * Math.PI) / 180;
const DECLINATION = (-7 * Math.PI) / 180;
const F: readonly [number, number, number] = [
  MAIN_NT * Math.cos(INCLINATION) * Math.sin(DECLINATION), MAIN_NT * Math.cos(INCLINATION) * Math.cos(DECLINATION), -MAIN_NT * Math.sin(INCLINATION),
];
/** Readings to a spacing along the line. */
const READINGS_PER_SPACING = 12;
const JOINT_M = 9.4;

export function madeSurvey({ seed, spacingM, depthM, noiseNT, bobM = 0, azimuthDeg = 0, lines = 10 }: MadeSurveyOptions): MadeSurvey {
  const random = new Random(seed);
  const side = (lines - 1) * spacingM;
  const within = (): number => side * (random.uniform() - 0.5) * 1.05;
  const between = (low: number, high: number): number => low + (high - low) * random.uniform();
  const poles: Pole[] = [];
  for (let well = 2 + random.integer(4); well > 0; well--) {
    const [x, y] = [within(), within()];
    const top = -depthM * between(1, 1.3);
    const m = -Math.exp(between(Math.log(60), Math.log(500))) * (random.uniform() < 0.2 ? -1 : 1);
    poles.push({ x, y, up: top, m });
    // Collars: each joint differs a little from the one above, the lower end closes the flux.
    let sum = m;
    for (let joint = 1; joint < 12; joint++) {
      const step = 0.25 * m * random.normal();
      sum += step;
      poles.push({ x, y, up: top - joint * JOINT_M, m: step });
    }
    poles.push({ x, y, up: top - 300, m: -sum });
  }
  const dipoles: Dipole[] = [];
  for (let iron = 4 + random.integer(8); iron > 0; iron--) {
    const up = -depthM * between(1, 1.6);
    // A peak of some tens to hundreds of nanotesla.
    const size = (Math.exp(between(Math.log(20), Math.log(400))) * Math.abs(up) ** 3) / 200;
    dipoles.push({ x: within(), y: within(), up, m: [size * random.normal(), size * random.normal(), size * random.normal()] });
  }
  const waves: Wave[] = [];
  for (let n = 0; n < 24; n++) {
    const k = (2 * Math.PI) / (spacingM * between(8, 60));
    const angle = 2 * Math.PI * random.uniform();
    waves.push({ kx: k * Math.cos(angle), ky: k * Math.sin(angle), phase: 2 * Math.PI * random.uniform(), nT: 4 * random.normal() });
  }
  const field = (x: number, y: number, up = 0): number => totalField({ poles, dipoles, waves }, [x, y, up]);

  const count = lines * ((lines - 1) * READINGS_PER_SPACING + 1);
  const survey = {
    x: new Float64Array(count), y: new Float64Array(count), up: new Float64Array(count), line: new Int32Array(count), value: new Float64Array(count),
  };
  const azimuth = (azimuthDeg * Math.PI) / 180;
  for (let l = 0, n = 0; l < lines; l++) {
    const phases = [0, 1, 2, 3].map(() => 2 * Math.PI * random.uniform());
    for (let step = 0; step <= (lines - 1) * READINGS_PER_SPACING; step++, n++) {
      const along = (step / READINGS_PER_SPACING) * spacingM - side / 2;
      const across = l * spacingM - side / 2 + 0.04 * spacingM * Math.sin(along / (1.7 * spacingM) + phases[0]!);
      survey.x[n] = across * Math.cos(azimuth) + along * Math.sin(azimuth);
      survey.y[n] = along * Math.cos(azimuth) - across * Math.sin(azimuth);
      survey.up[n] = bobM * 0.5 * (Math.sin(along / (0.9 * spacingM) + phases[1]!) + Math.sin(along / (2.3 * spacingM) + phases[2]!));
      survey.line[n] = l;
      survey.value[n] = field(survey.x[n]!, survey.y[n]!, survey.up[n]!) + noiseNT * random.normal();
    }
  }
  return { ...survey, field };
}

function totalField({ poles, dipoles, waves }: { poles: readonly Pole[]; dipoles: readonly Dipole[]; waves: readonly Wave[] }, [x, y, up]: readonly [number, number, number]): number {
  let [bx, by, bz] = [0, 0, 0];
  for (const pole of poles) {
    const [rx, ry, rz] = [x - pole.x, y - pole.y, up - pole.up];
    const k = (100 * pole.m) / Math.hypot(rx, ry, rz) ** 3;
    bx += k * rx;
    by += k * ry;
    bz += k * rz;
  }
  for (const { x: dx, y: dy, up: dz, m } of dipoles) {
    const [rx, ry, rz] = [x - dx, y - dy, up - dz];
    const r = Math.hypot(rx, ry, rz);
    const dot = (3 * (m[0] * rx + m[1] * ry + m[2] * rz)) / r ** 5;
    bx += 100 * (dot * rx - m[0] / r ** 3);
    by += 100 * (dot * ry - m[1] / r ** 3);
    bz += 100 * (dot * rz - m[2] / r ** 3);
  }
  let nT = Math.hypot(F[0] + bx, F[1] + by, F[2] + bz) - MAIN_NT;
  // Geology is a harmonic field too: each wave fades with height.
  for (const { kx, ky, phase, nT: size } of waves) nT += size * Math.exp(-Math.hypot(kx, ky) * up) * Math.cos(kx * x + ky * y + phase);
  return nT;
}
