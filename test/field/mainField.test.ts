import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { fieldDirection, mainFieldAt, mainFieldInFrame } from '../../src/field/mainField.js';

/** Official test values of the model, as the geomagnetism package ships them for its own tests (height in km). */
const FILE = createRequire(import.meta.url).resolve('geomagnetism').replace(/index\.js$/, 'test/values.csv');
const rows = readFileSync(FILE, 'utf8').trim().split(/\r?\n/).slice(1).map((line) => line.split(',').map(Number));
const of2025 = rows.filter(([date]) => date! >= 2025);

// nT and degrees: values are printed to 0.1 nT and 0.01°, so half of the last digit either way plus our own rounding.
const TOTAL_NT = 0.1;
const ANGLE_DEG = 0.01;

describe('mainFieldAt', () => {
  it('agrees with all 100 official test values of WMM2025', () => {
    expect(of2025).toHaveLength(100);
    for (const [date, km, lat, lon, , , , , f, incl, decl] of of2025 as Row[]) {
      const field = mainFieldAt(lon, lat, km * 1000, date);
      expect(field.model).toBe('WMM2025');
      expect(Math.abs(field.totalNT - f)).toBeLessThanOrEqual(TOTAL_NT);
      expect(Math.abs(field.inclinationDeg - incl)).toBeLessThanOrEqual(ANGLE_DEG);
      expect(Math.abs(field.declinationDeg - decl)).toBeLessThanOrEqual(ANGLE_DEG);
    }
  });

  it('agrees with the test values of WMM2020', () => {
    const of2020 = rows.filter(([date]) => date! >= 2020 && date! < 2025);
    expect(of2020.length).toBeGreaterThan(50);
    for (const [date, km, lat, lon, , , , , f, incl, decl] of of2020 as Row[]) {
      const field = mainFieldAt(lon, lat, km * 1000, date);
      expect(Math.abs(field.totalNT - f)).toBeLessThanOrEqual(TOTAL_NT);
      expect(Math.abs(field.inclinationDeg - incl)).toBeLessThanOrEqual(ANGLE_DEG);
      expect(Math.abs(field.declinationDeg - decl)).toBeLessThanOrEqual(ANGLE_DEG);
    }
  });

  it('serves the last weeks of the term and refuses dates outside the model', () => {
    expect(mainFieldAt(-79.8, 40.4, 300, 2029.95).totalNT).toBeGreaterThan(45_000);
    for (const year of [2014.99, 2030.01, Number.NaN]) {
      expect(() => mainFieldAt(-79.8, 40.4, 300, year)).toThrow(UserError);
      try { mainFieldAt(-79.8, 40.4, 300, year); } catch (error) { expect((error as UserError).code).toBe('date_out_of_range'); }
    }
  });

  it('gives the same answer when asked twice, whatever was asked in between', () => {
    const first = mainFieldAt(-79.8, 40.4, 300, 2026.25);
    mainFieldAt(10, 50, 0, 2029);
    expect(mainFieldAt(-79.8, 40.4, 300, 2026.25)).toEqual(first);
  });
});

describe('direction in the frame', () => {
  it('points down in the north and east of north where declination exceeds convergence', () => {
    const place = { lonDeg: -79.8, latDeg: 40.4, heightM: 300, decimalYear: 2026.25 };
    const straight = mainFieldInFrame({ ...place, convergenceDeg: 0 });
    const turned = mainFieldInFrame({ ...place, convergenceDeg: straight.declinationDeg });
    expect(straight.unit[2]).toBeLessThan(-0.8);
    expect(straight.unit[0]).toBeLessThan(0); // declination is about 9° west there
    expect(turned.unit[0]).toBeCloseTo(0, 12);
    expect(Math.hypot(...straight.unit)).toBeCloseTo(1, 12);
  });

  it('is (cos I sin D, cos I cos D, −sin I)', () => {
    expectEach(fieldDirection(90, 37), [0, 0, -1]);
    expectEach(fieldDirection(0, 90), [1, 0, 0]);
    expectEach(fieldDirection(-30, 0), [0, Math.sqrt(3) / 2, 0.5]);
  });
});

type Row = [number, number, number, number, number, number, number, number, number, number, number];

function expectEach(a: readonly number[], b: readonly number[]): void {
  a.forEach((value, i) => expect(value).toBeCloseTo(b[i]!, 12));
}
