import type { Area } from '../density/types.js';
import { datumShift } from '../geodesy/datumShift.js';
import { decimalYear } from '../geodesy/decimalYear.js';
import { crs } from '../geodesy/crs.js';
import { Random } from '../numerics/random.js';
import { parseTimeColumn } from '../table/parseTimeColumn.js';
import { writeCsv } from '../table/writeCsv.js';
import { baseLog } from './baseLog.js';
import { geologyField } from './geology.js';
import { inMetres } from './inMetres.js';
import { headingEffect, sensorReadings } from './instrument.js';
import { localMainField } from './localMainField.js';
import { openLines } from './openLines.js';
import { sourceField } from './sourceField.js';
import { casingPoles, pipelineSources, scrapDipole, type Dipoles, type Poles } from './steelSources.js';
import type { FieldDay, Scenario, ScenarioRings, Track, Truth } from './types.js';
import { timeVariation } from './variation.js';
import { walk } from './walk.js';

/**
 * A made field day: a walker with a total-field sensor and a satellite receiver over stated sources, and a base
 * station. The true place of the sensor makes the field, the recorded place is what the files tell. Nothing in it is
 * simplified to suit what a later stage fits: casings have collars and lean, the field is the exact |F + B|, the ground
 * has rock and scrap of its own.
 *
 * @param scenario with its defaults filled in; the same scenario gives the same bytes
 * @returns Files as text, the truth, and the track for tests
 */
export function simulateFieldDay(scenario: Scenario): FieldDay {
  const frame = crs(scenario.frame, 'scenario, frame');
  const setting = inMetres(scenario, frame.metresPerUnit);
  const random = new Random(setting.seed);
  const startS = parseTimeColumn([setting.start], {}, { source: 'scenario', column: 'start' })[0]!;
  const toWgs84 = datumShift(frame.datum, 'WGS 84', { receiver: setting.receiver });
  const middle = middleOf(setting.parcel);
  const main = localMainField(frame, middle, { toWgs84, heightM: setting.ground_height_m, decimalYear: decimalYear(setting.start, 'scenario, start') });

  const parcel: Area = setting.parcel;
  const exclusions: Area = setting.exclusions;
  const { spacing_m, azimuth_deg, margin_m, every, tie_spacing_m, unwalked } = setting.lines;
  const survey = openLines(parcel, exclusions, { spacingM: spacing_m, azimuthDeg: azimuth_deg, marginM: margin_m, every, firstLine: 1 });
  const ties = tie_spacing_m > 0
    ? openLines(parcel, exclusions, { spacingM: tie_spacing_m, azimuthDeg: azimuth_deg + 90, marginM: margin_m, every: 1, firstLine: 1 + (survey.at(-1)?.line ?? 0) })
    : [];
  const track = walk({
    scenario: setting, pieces: [...survey, ...ties], startS, random: random.fork('walk'),
    keep: (x, y) => unwalked.every(({ at, radius_m }) => Math.hypot(x - at[0], y - at[1]) > radius_m),
  });

  const lonDeg = toWgs84.place(...frame.inverse(...middle)).lonDeg;
  const variation = timeVariation(setting.variation, lonDeg, random.fork('variation'));
  const trueNT = fieldAlong(track, setting, { main, middle, variation, random });
  const fieldNT = sensorReadings(trueNT, setting.sensor, random.fork('sensor'));

  const lon = new Float64Array(track.count);
  const lat = new Float64Array(track.count);
  for (let i = 0; i < track.count; i++) {
    const place = toWgs84.place(...frame.inverse(track.recordedX[i]!, track.recordedY[i]!));
    lon[i] = place.lonDeg;
    lat[i] = place.latDeg;
  }
  return {
    readings: writeCsv([
      { name: 'utc', utcS: track.timeS, decimals: 1 },
      { name: 'lon', values: lon, decimals: 8 },
      { name: 'lat', values: lat, decimals: 8 },
      { name: 'nt', values: fieldNT, decimals: 2 },
      { name: 'line', values: track.line, decimals: 0 },
      { name: 'sensor_m', values: new Float64Array(track.count).fill(setting.lines.sensor_height_m), decimals: 2 },
    ]),
    base: baseLog({
      setting: setting.base, startS, endS: track.timeS[track.count - 1] ?? startS, mainNT: Math.hypot(...main.at), variation,
      random: random.fork('base'),
    }),
    truth: truthOf(setting),
    track,
    fieldNT,
  };
}

/** True total field at each reading, heading effect included, nT. */
function fieldAlong(
  track: Track, setting: Scenario,
  { main, middle, variation, random }: { main: ReturnType<typeof localMainField>; middle: readonly [number, number]; variation: (timeS: number) => number; random: Random },
): Float64Array {
  const strength = Math.hypot(...main.at);
  const unit = [main.at[0] / strength, main.at[1] / strength, main.at[2] / strength] as const;
  const poles: Poles = setting.casings.flatMap((casing) => casingPoles(casing, setting.steel, random.fork(`casing ${casing.id}`)));
  const dipoles: Dipoles = setting.scrap.map(scrapDipole);
  for (const pipe of setting.pipelines) {
    const sources = pipelineSources(pipe, unit, random.fork(`pipeline ${pipe.id}`));
    poles.push(...sources.poles);
    dipoles.push(...sources.dipoles);
  }
  const steel = sourceField(main, poles, dipoles);
  const rock = geologyField(setting.geology, random.fork('geology'));
  return Float64Array.from(track.timeS, (timeS, i) => {
    const x = track.x[i]!;
    const y = track.y[i]!;
    const { anomalyNT, mainNT } = steel(x, y, track.heightM[i]!);
    return mainNT + anomalyNT + rock(x - middle[0], y - middle[1]) + variation(timeS) + headingEffect(setting.heading, track.yawDeg[i]!);
  });
}

/** Middle of the parcel's bounds. */
function middleOf(parcel: readonly ScenarioRings[]): [number, number] {
  const points = parcel.flatMap((rings) => rings[0]!);
  const x = points.map((p) => p[0]);
  const y = points.map((p) => p[1]);
  return [(Math.min(...x) + Math.max(...x)) / 2, (Math.min(...y) + Math.max(...y)) / 2];
}

function truthOf(setting: Scenario): Truth {
  return {
    frame: setting.frame,
    casings: setting.casings.map(({ id, at, top_depth_m, pole_am, tilt_deg }) => ({ id, x: at[0], y: at[1], top_depth_m, pole_am, tilt_deg })),
    pipelines: setting.pipelines.map(({ id, depth_m, points }) => ({ id, depth_m, points })),
    scrap: setting.scrap.map(({ id, at, depth_m, moment_am2 }) => ({ id, x: at[0], y: at[1], depth_m, moment_am2: Math.hypot(...moment_am2) })),
    pulled: setting.pulled.map(({ id, at }) => ({ id, x: at[0], y: at[1] })),
  };
}
