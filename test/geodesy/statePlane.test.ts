import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { statePlaneZone } from './statePlaneZones.js';

const FOLDER = new URL('../../../shared/checks/', import.meta.url);
/** The tables print thousandths of a foot and come from a program of the 1980s; PROJ itself agrees to 0.002 ft. */
const TOLERANCE_FT = 0.002;
/** EPSG rounds these zones' own constants: false coordinates of 16404166.67 ft, and a scale of 0.9999938 for 1 − 1/160000. */
const ROUNDED_BY_EPSG: Readonly<Record<string, number>> = { 'EPSG:26731': 0.0055, 'EPSG:32030': 0.0095 };

interface Row { readonly zone: number; readonly label: string; readonly lon: number; readonly lat: number; readonly east: number; readonly north: number }

function rows(name: string): Row[] {
  return readFileSync(new URL(name, FOLDER), 'utf8').trim().split('\n').slice(1).map((line) => {
    const cells = line.split(',');
    return { zone: Number(cells[0]!.split(':')[1]), label: cells[8]!, lon: dms(cells[2]!), lat: dms(cells[3]!), east: Number(cells[6]), north: Number(cells[7]) };
  });
}

function dms(text: string): number {
  const [, sign, d, m, s] = /^(-?)(\d+)d(\d+)'([\d.]+)$/.exec(text)!;
  return (sign === '-' ? -1 : 1) * (Number(d) + Number(m) / 60 + Number(s) / 3600);
}

describe.each([['NAD27', 'state_plane_nad27.csv', 100], ['NAD83', 'state_plane_nad83.csv', 200]] as const)('State Plane on %s', (datum, file, least) => {
  it.skipIf(!existsSync(new URL(file, FOLDER)))(`agrees with the table of ${file}, forwards and backwards`, () => {
    const misses: string[] = [];
    let checked = 0;
    for (const row of rows(file)) {
      const zone = statePlaneZone(datum, row.zone);
      if (zone === null) continue;
      const [x, y] = zone.forward(row.lon, row.lat);
      const miss = Math.hypot(x / US_SURVEY_FOOT_M - row.east, y / US_SURVEY_FOOT_M - row.north);
      const [lon, lat] = zone.inverse(row.east * US_SURVEY_FOOT_M, row.north * US_SURVEY_FOOT_M);
      const back = Math.hypot((lon - row.lon) * Math.cos(row.lat * Math.PI / 180), lat - row.lat) * 111_000 / US_SURVEY_FOOT_M;
      const tolerance = ROUNDED_BY_EPSG[zone.code] ?? TOLERANCE_FT;
      if (!(miss <= tolerance && back <= tolerance * 1.01)) misses.push(`${row.label} ${zone.code} ${miss} ${back}`);
      checked++;
    }
    expect(misses).toEqual([]);
    expect(checked).toBeGreaterThan(least);
  });
});
