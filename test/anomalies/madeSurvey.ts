import { Random } from '../../src/numerics/random.js';
import { addDipole } from '../../src/field/dipole.js';
import { fieldDirection } from '../../src/field/mainField.js';
import { addPole } from '../../src/field/pole.js';
import { totalFieldAnomaly } from '../../src/field/totalField.js';
import type { Readings } from '../../src/readings/types.js';
import type { Grid } from '../../src/raster/types.js';
import type { Site } from '../../src/site/types.js';

/** A made residual with its truth. It shares no code with the search but the field of one pole and of one dipole. */
export interface MadeSurvey {
  readonly readings: Readings;
  readonly site: Site;
  readonly casings: ReadonlyArray<{ readonly x: number; readonly y: number; readonly depthM: number; readonly poleAM: number }>;
  readonly scrap: ReadonlyArray<{ readonly x: number; readonly y: number }>;
  readonly pipe: ReadonlyArray<readonly [number, number]>;
}

export interface MadeOptions {
  readonly sizeM: number;
  readonly spacingM: number;
  /** Walk each n-th line only. */
  readonly every: number;
  readonly casings: number;
  readonly scrap: number;
  readonly pipe: boolean;
  /** Factor on sensor noise and geology. */
  readonly noise: number;
  readonly positionSdM: number;
  readonly rateHz: number;
}
export const MADE_DEFAULTS: MadeOptions = Object.freeze({
  sizeM: 200, spacingM: 8, every: 1, casings: 7, scrap: 6, pipe: true, noise: 1, positionSdM: 0.3, rateHz: 10,
});

export const INCLINATION_DEG = 66;
export const TOTAL_NT = 52000;

export function madeSite(target: Site['target'] = { poleAM: [60, 400], depthM: [0, 2.5], basis: 'stated' }): Site {
  const unit = fieldDirection(INCLINATION_DEG, -11);
  return {
    title: 'made ground', mainField: { totalNT: TOTAL_NT, inclinationDeg: INCLINATION_DEG, declinationDeg: -10, convergenceDeg: 1, unit }, target,
  } as unknown as Site;
}

type Row = readonly number[];

export function madeSurvey(seed: number, options: Partial<MadeOptions> = {}): MadeSurvey {
  const { sizeM, spacingM, every, casings: casingCount, scrap: scrapCount, pipe: withPipe, noise, positionSdM, rateHz } = { ...MADE_DEFAULTS, ...options };
  const random = new Random(seed);
  const ground = random.fork('ground');
  const site = madeSite();
  const f = site.mainField.unit.map((u) => u * TOTAL_NT);

  const taken: Array<readonly [number, number]> = [];
  const angle = (20 + 50 * ground.uniform()) * (Math.PI / 180);
  const pipeX = sizeM * (0.3 + 0.4 * ground.uniform());
  const fromPipe = (x: number, y: number) => Math.abs((x - pipeX) * Math.cos(angle) - (y - sizeM / 2) * Math.sin(angle));
  const place = (apartM: number, marginM: number): [number, number] => {
    for (;;) {
      const x = marginM + (sizeM - 2 * marginM) * ground.uniform();
      const y = marginM + (sizeM - 2 * marginM) * ground.uniform();
      if (withPipe && fromPipe(x, y) < apartM / 2) continue;
      if (taken.some(([a, b]) => Math.hypot(a - x, b - y) < apartM)) continue;
      taken.push([x, y]);
      return [x, y];
    }
  };
  const poles: Row[] = [];
  const dipoles: Row[] = [];
  const casings = Array.from({ length: casingCount }, (_, k) => {
    const [x, y] = place(20, 8);
    const depthM = 0.5 + 1.7 * ground.uniform();
    const poleAM = (k === 2 ? -1 : 1) * Math.exp(Math.log(60) + Math.log(350 / 60) * ground.uniform());
    let flux = poleAM;
    poles.push([x, y, -depthM, -flux]);
    for (let down = 4 + 8 * ground.uniform(); down < 200; down += 8 + 3 * ground.uniform()) {
      const next = poleAM * (ground.uniform() < 0.04 ? -1 : 1) * (1 + 0.25 * ground.normal());
      poles.push([x, y, -depthM - down, flux - next]);
      flux = next;
    }
    poles.push([x, y, -depthM - 200, flux]);
    return { x, y, depthM, poleAM };
  });
  const scrap = Array.from({ length: scrapCount }, (_, k) => {
    // The first piece lies beside a casing.
    const near = k === 0 && casings.length > 0 ? casings[0]! : null;
    const turn = 2 * Math.PI * ground.uniform();
    const [x, y] = near ? [near.x + 6 * Math.cos(turn), near.y + 6 * Math.sin(turn)] : place(14, 6);
    const moment = 5 * Math.exp(2.2 * ground.uniform());
    const [a, b, c] = [ground.normal(), ground.normal(), ground.normal()];
    const size = moment / Math.hypot(a, b, c);
    dipoles.push([x, y, -0.1 - 0.8 * ground.uniform(), a * size, b * size, c * size]);
    return { x, y };
  });
  const pipe: Array<[number, number]> = [];
  if (withPipe) {
    let flux = 0;
    for (let t = -sizeM; t <= sizeM; t += 1) {
      const x = pipeX + t * Math.sin(angle);
      const y = sizeM / 2 + t * Math.cos(angle);
      if (x < -10 || y < -10 || x > sizeM + 10 || y > sizeM + 10) continue;
      pipe.push([x, y]);
      dipoles.push([x, y, -1.1, ...site.mainField.unit.map((u) => 1.2 * u)]);
      if (t % 12 === 0) {
        const next = 8 * ground.normal();
        poles.push([x, y, -1.1, flux - next]);
        flux = next;
      }
    }
  }

  const waves = ([[8, 200], [1.5, 40], [0.5, 10]] as const).flatMap(([rms, wavelength]) => Array.from({ length: 16 }, () => {
    const k = (2 * Math.PI) / (wavelength * 1.5 ** (2 * ground.uniform() - 1));
    const to = 2 * Math.PI * ground.uniform();
    return [k * Math.sin(to), k * Math.cos(to), 2 * Math.PI * ground.uniform(), noise * rms * Math.sqrt(2 / 16)] as const;
  }));

  const air = random.fork('walk');
  const keep = (s: number, tau: number) => Math.exp(-s / tau);
  let ex = positionSdM * air.normal();
  let ey = positionSdM * air.normal();
  let bob = 0;
  let sway = 0;
  const step = (seconds: number) => {
    const p = keep(seconds, 60);
    ex = p * ex + positionSdM * Math.sqrt(1 - p * p) * air.normal();
    ey = p * ey + positionSdM * Math.sqrt(1 - p * p) * air.normal();
    const h = keep(seconds, 4);
    bob = h * bob + 0.08 * Math.sqrt(1 - h * h) * air.normal();
    const w = keep(seconds, 8);
    sway = w * sway + 0.3 * Math.sqrt(1 - w * w) * air.normal();
  };
  const rows: Row[] = [];
  const b = new Float64Array(3);
  let time = 1_776_000_000;
  const lines = Math.floor(sizeM / (spacingM * every)) + 1;
  for (let line = 0; line < lines; line++) {
    const offset = 1.5 * noise * air.normal();
    for (let d = 0; d <= sizeM; d += 1.2 / rateHz) {
      step(1 / rateHz);
      time += 1 / rateHz;
      const x = line * spacingM * every + sway;
      const y = line % 2 === 0 ? d : sizeM - d;
      const z = 1.7 + bob;
      b.fill(0);
      for (const p of poles) if (Math.abs(p[0]! - x) < 120) addPole(b, p[3]!, x - p[0]!, y - p[1]!, z - p[2]!);
      for (const p of dipoles) if (Math.abs(p[0]! - x) < 40 && Math.abs(p[1]! - y) < 40) addDipole(b, p[3]!, p[4]!, p[5]!, x - p[0]!, y - p[1]!, z - p[2]!);
      let value = totalFieldAnomaly(b, f) + offset + 0.15 * noise * air.normal();
      for (const [kx, ky, phase, size] of waves) value += size * Math.cos(kx * x + ky * y + phase);
      rows.push([x + ex + 0.02 * air.normal(), y + ey + 0.02 * air.normal(), time, line, value]);
    }
    step(15);
    time += 15;
  }
  const column = (k: number) => Float64Array.from(rows, (row) => row[k]!);
  const residual = column(4);
  return {
    site, casings, scrap, pipe,
    readings: {
      count: rows.length, x: column(0), y: column(1), heightM: new Float64Array(rows.length).fill(1.7), timeS: column(2),
      line: Int32Array.from(rows, (row) => row[3]!), lineNames: Array.from({ length: lines }, (_, k) => String(k + 1)),
      raw: residual, steps: [], residual, flag: new Uint8Array(rows.length), positionSdM, positionCorrelationS: 60, warnings: [],
    },
  };
}

/** A plain grid of a residual: inverse-distance mean of the readings within a line spacing of each cell; NaN elsewhere. */
export function plainGrid(readings: Readings, { cellM, reachM }: { readonly cellM: number; readonly reachM: number }): Grid {
  let [west, east, south, north] = [Infinity, -Infinity, Infinity, -Infinity];
  for (let i = 0; i < readings.count; i++) {
    west = Math.min(west, readings.x[i]!);
    east = Math.max(east, readings.x[i]!);
    south = Math.min(south, readings.y[i]!);
    north = Math.max(north, readings.y[i]!);
  }
  const width = Math.ceil((east - west) / cellM) + 1;
  const height = Math.ceil((north - south) / cellM) + 1;
  const sums = new Float64Array(width * height);
  const weights = new Float64Array(width * height);
  const cells = Math.ceil(reachM / cellM);
  const stride = Math.max(1, Math.floor(readings.count / (4 * width * height) + 0.5)) * 3;
  for (let i = 0; i < readings.count; i += stride) {
    if (!Number.isFinite(readings.residual[i]!)) continue;
    const column = (readings.x[i]! - west) / cellM;
    const row = (north - readings.y[i]!) / cellM;
    for (let r = Math.max(0, Math.round(row) - cells); r <= Math.min(height - 1, Math.round(row) + cells); r++) {
      for (let c = Math.max(0, Math.round(column) - cells); c <= Math.min(width - 1, Math.round(column) + cells); c++) {
        const d2 = ((r - row) ** 2 + (c - column) ** 2) * cellM * cellM;
        if (d2 > reachM * reachM) continue;
        const weight = 1 / (d2 + 0.2 * cellM * cellM) ** 2;
        sums[r * width + c]! += weight * readings.residual[i]!;
        weights[r * width + c]! += weight;
      }
    }
  }
  return { width, height, west: west - cellM / 2, north: north + cellM / 2, cellM, values: sums.map((sum, k) => (weights[k]! > 0 ? sum / weights[k]! : NaN)) };
}
