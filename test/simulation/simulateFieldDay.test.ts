import { describe, expect, it } from 'vitest';
import { mainFieldAt } from '../../src/field/mainField.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { decimalYear } from '../../src/geodesy/decimalYear.js';
import { crs } from '../../src/geodesy/crs.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { SCENARIO_SCHEMA } from '../../src/simulation/scenarioSchema.js';
import { simulateFieldDay } from '../../src/simulation/simulateFieldDay.js';
import type { Scenario } from '../../src/simulation/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { numberColumn } from '../../src/table/numberColumn.js';

const X = 442_300;
const Y = 171_650;
const FEET = 1200 / 3937;

/** A scenario file as a user writes it: what is left out is filled in from the schema. */
function scenario(given: Record<string, unknown> = {}): Scenario {
  return readParameters({
    frame: 'EPSG:2272', coordinates: 'metres', start: '2026-04-14T13:05:00Z', parcel: [[[[X, Y], [X + 90, Y], [X + 90, Y + 60], [X, Y + 60]]]], ...given,
  }, SCENARIO_SCHEMA, { where: 'scenario.json', resolve: (path) => path }) as unknown as Scenario;
}

/** Nothing but the main field and what is asked for. */
const STILL = {
  geology: { slope_nt_km: 0, waves: [] }, heading: { first_nt: 0, second_nt: 0 }, variation: { daily_nt: 0, pulsation_nt: 0 },
  sensor: { noise_nt: 0, dropout_share: 0, spike_share: 0 },
};
const STEADY = { walk: { sway_m: 0, bob_m: 0, speed_variation: 0, yaw_deg: 0 }, position: { sd_m: 0, white_m: 0 } };

function rootMeanSquare(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i]! ** 2;
  return Math.sqrt(sum / values.length);
}

describe('simulateFieldDay', () => {
  it('fills in what a scenario leaves out, and gives the same bytes again', () => {
    const first = simulateFieldDay(scenario());
    const second = simulateFieldDay(scenario());
    expect(Buffer.from(first.readings).equals(Buffer.from(second.readings))).toBe(true);
    expect(Buffer.from(first.base).equals(Buffer.from(second.base))).toBe(true);
    expect(Buffer.from(simulateFieldDay(scenario({ seed: 2 })).readings).equals(Buffer.from(first.readings))).toBe(false);
  });

  it('is the main field of the place and date where nothing else is', () => {
    const day = simulateFieldDay(scenario({ ...STILL, ground_height_m: 250 }));
    const frame = crs('EPSG:2272');
    const toWgs84 = datumShift('NAD83', 'WGS 84', { receiver: { frame: 'ITRF2014', epoch: 2026.28 } });
    for (const i of [0, 1000, day.track.count - 1]) {
      const { lonDeg, latDeg } = toWgs84.place(...frame.inverse(day.track.x[i]!, day.track.y[i]!));
      expect(day.fieldNT[i]).toBeCloseTo(mainFieldAt(lonDeg, latDeg, 250, decimalYear('2026-04-14')).totalNT, 2);
    }
  });

  it('has over a lone pole what the closed form gives, by hand', () => {
    const at = [X + 44, Y + 30];
    const source = { casings: [{ id: 'a', at, pole_am: 200, top_depth_m: 1, length_m: 5000 }], steel: { joint_spread: 0, reversed_share: 0 } };
    const day = simulateFieldDay(scenario({ ...STILL, ...STEADY, ...source }));
    const bare = simulateFieldDay(scenario({ ...STILL, ...STEADY }));
    const over = [...day.track.x.keys()].toSorted((a, b) => Math.hypot(day.track.x[a]! - at[0]!, day.track.y[a]! - at[1]!) - Math.hypot(day.track.x[b]! - at[0]!, day.track.y[b]! - at[1]!))[0]!;
    const [dx, dy] = [day.track.x[over]! - at[0]!, day.track.y[over]! - at[1]!];
    const r3 = (dx * dx + dy * dy + 2.7 ** 2) ** 1.5;
    // Field of the attracting top, 2.7 m below the sensor: 100 × 200 × r/r³ towards it; F from the model, in grid axes.
    const b = [-20_000 * dx / r3, -20_000 * dy / r3, -20_000 * 2.7 / r3];
    const frame = crs('EPSG:2272');
    const [lon, lat] = frame.inverse(X, Y);
    const { totalNT, inclinationDeg, declinationDeg } = mainFieldAt(lon, lat, 0, decimalYear('2026-04-14'));
    // Grid convergence of a Lambert zone is n (λ − λ0), n the sine of the middle of its parallels 39°56′ and 40°58′ to four digits.
    const turn = (declinationDeg - Math.sin(40.45 * Math.PI / 180) * (lon + 77.75)) * Math.PI / 180;
    const cosI = Math.cos(inclinationDeg * Math.PI / 180);
    const f = [totalNT * cosI * Math.sin(turn), totalNT * cosI * Math.cos(turn), -totalNT * Math.sin(inclinationDeg * Math.PI / 180)];
    const wanted = Math.hypot(f[0]! + b[0]!, f[1]! + b[1]!, f[2]! + b[2]!) - totalNT;
    expect(wanted).toBeGreaterThan(1500);
    expect(Math.abs(day.fieldNT[over]! - bare.fieldNT[over]! - wanted)).toBeLessThan(2);
  });

  it('reads feet of the frame as well as metres', () => {
    const source = (scale: number) => ({
      parcel: [[[[X / scale, Y / scale], [(X + 90) / scale, Y / scale], [(X + 90) / scale, (Y + 60) / scale], [X / scale, (Y + 60) / scale]]]],
      casings: [{ id: 'a', at: [(X + 40) / scale, (Y + 30) / scale], pole_am: 150 }], scrap: [{ id: 's', at: [(X + 10) / scale, (Y + 10) / scale], moment_am2: [1, 2, 3] }],
      pipelines: [{ id: 'p', points: [[X / scale, Y / scale], [(X + 90) / scale, (Y + 50) / scale]] }],
    });
    const metres = simulateFieldDay(scenario(source(1)));
    const feet = simulateFieldDay(scenario({ ...source(FEET), coordinates: 'crs_units' }));
    expect(feet.truth.casings[0]!.x).toBeCloseTo(X + 40, 6);
    expect(feet.track.count).toBe(metres.track.count);
    feet.fieldNT.forEach((value, i) => { if (!Number.isNaN(value)) expect(Math.abs(value - metres.fieldNT[i]!)).toBeLessThan(0.01); });
  });

  it('writes the recorded place, not the true one, with an error as stated', () => {
    // Long enough for some forty correlation times.
    const day = simulateFieldDay(scenario({ lines: { spacing_m: 1.5 }, position: { sd_m: 0.3, correlation_s: 60 } }));
    const errors = day.track.x.map((x, i) => day.track.recordedX[i]! - x);
    expect(rootMeanSquare(errors)).toBeGreaterThan(0.2);
    expect(rootMeanSquare(errors)).toBeLessThan(0.42);
    const table = parseCsv(day.readings, 'readings.csv');
    expect(table.names).toEqual(['utc', 'lon', 'lat', 'nt', 'line', 'sensor_m']);
    const lon = numberColumn(table, 'lon');
    const lat = numberColumn(table, 'lat');
    const frame = crs('EPSG:2272');
    const toFrame = datumShift('WGS 84', 'NAD83', { receiver: { frame: 'ITRF2014', epoch: 2026.28 } });
    for (let i = 0; i < lon.length; i += 500) {
      const place = toFrame.place(lon[i]!, lat[i]!);
      const [x, y] = frame.forward(place.lonDeg, place.latDeg);
      // Eight decimals of a degree: half a millimetre.
      expect(Math.hypot(x - day.track.recordedX[i]!, y - day.track.recordedY[i]!)).toBeLessThan(2e-3);
    }
  });

  it('walks at its rate and speed, to and fro, and not where it may not', () => {
    const day = simulateFieldDay(scenario({ lines: { spacing_m: 10, unwalked: [{ at: [X + 45, Y + 30], radius_m: 15 }], tie_spacing_m: 30 } }));
    const { x, y, timeS, line, count } = day.track;
    expect(new Set(line).size).toBe(9 + 2);
    let lengthM = 0;
    let seconds = 0;
    for (let i = 1; i < count; i++) {
      expect(Math.hypot(x[i]! - X - 45, y[i]! - Y - 30)).toBeGreaterThan(15);
      const stepS = timeS[i]! - timeS[i - 1]!;
      expect(stepS).toBeGreaterThan(0.099);
      if (stepS > 0.101) continue;
      lengthM += Math.abs(line[i]! <= 9 ? y[i]! - y[i - 1]! : x[i]! - x[i - 1]!);
      seconds += stepS;
    }
    expect(lengthM / seconds).toBeGreaterThan(1.1);
    expect(lengthM / seconds).toBeLessThan(1.3);
  });

  it('keeps the walk when the sensor is changed, and the ground when the walk is', () => {
    const first = simulateFieldDay(scenario());
    const noisy = simulateFieldDay(scenario({ sensor: { noise_nt: 2 } }));
    expect([...noisy.track.recordedX]).toEqual([...first.track.recordedX]);
    const high = simulateFieldDay(scenario({ ...STILL, ...STEADY, geology: { slope_nt_km: 0 }, lines: { sensor_height_m: 3.7 } }));
    const low = simulateFieldDay(scenario({ ...STILL, ...STEADY, geology: { slope_nt_km: 0 } }));
    high.fieldNT.forEach((value, i) => expect(value).toBeCloseTo(low.fieldNT[i]!, 6));
  });

  it('has noise, dropouts, spikes and a base log with its gap', () => {
    const day = simulateFieldDay(scenario({
      ...STEADY, sensor: { noise_nt: 0.5, dropout_share: 0.002, dropout_run: 5, spike_share: 0.002, spike_nt: 800 },
      base: { interval_s: 3, gaps: [{ from_s: 100, length_s: 120 }], spikes: 2 }, variation: { daily_nt: 0, pulsation_nt: 0 },
    }));
    const quiet = simulateFieldDay(scenario({ ...STEADY, ...STILL, geology: scenario().geology, heading: scenario().heading }));
    const errors = [...day.fieldNT].map((value, i) => value - quiet.fieldNT[i]!);
    const noise = errors.filter((value) => Math.abs(value) < 5);
    expect(rootMeanSquare(noise)).toBeCloseTo(0.5, 1);
    expect(errors.filter((value) => Math.abs(value) > 100 && Math.abs(value) < 2000).length).toBeGreaterThan(3);
    expect(day.fieldNT.some((value) => Number.isNaN(value) || value === 0)).toBe(true);
    const base = parseCsv(day.base, 'base.csv');
    const times = base.columns.get('utc')!.map((text) => Date.parse(text) / 1000);
    const steps = times.slice(1).map((time, i) => time - times[i]!);
    expect(Math.max(...steps)).toBeGreaterThanOrEqual(120);
    expect(steps.filter((step) => Math.abs(step - 3) > 0.011)).toHaveLength(1);
  });

  it('keeps the pulled well in the truth and out of the field', () => {
    const still = { ...STILL, ...STEADY };
    const pulled = simulateFieldDay(scenario({ ...still, pulled: [{ id: 'w', at: [X + 40, Y + 30] }] }));
    expect([...pulled.fieldNT]).toEqual([...simulateFieldDay(scenario(still)).fieldNT]);
    expect(pulled.truth.pulled).toEqual([{ id: 'w', x: X + 40, y: Y + 30 }]);
  });
});
