import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { casingSteel, listedCasings, poleFromCasing } from '../../src/field/casing.js';

const TABLE = new URL('../../../shared/checks/casing_api5ct.csv', import.meta.url);

describe('casingSteel', () => {
  // API Spec 5CT, 7 in 23 lb/ft: inside diameter 6.366 in, steel 6.656 in² = 42.94 cm².
  it('knows 7 in 23 lb/ft', () => {
    const steel = casingSteel({ odIn: 7, lbPerFt: 23 });
    expect(steel.listed).toBe(true);
    expect(steel.idIn).toBeCloseTo(6.366, 9);
    expect(steel.steelAreaM2).toBeCloseTo(42.94e-4, 6);
  });

  it.skipIf(!existsSync(TABLE))('agrees with a public table of API Spec 5CT, row by row', () => {
    const rows = readFileSync(TABLE, 'utf8').trim().split(/\r?\n/).slice(1).map((line) => line.split(',').map(Number));
    expect(listedCasings()).toHaveLength(rows.length);
    for (const [odIn, lbPerFt, idIn, wallIn, , , , areaCm2] of rows as Array<[number, number, number, number, number, number, number, number]>) {
      const steel = casingSteel({ odIn, lbPerFt });
      expect(steel.listed).toBe(true);
      expect(Math.abs(steel.idIn - idIn)).toBeLessThan(0.0015); // the wall is printed to 0.001 in
      expect(Math.abs(steel.wallIn - wallIn)).toBeLessThan(0.0006);
      expect(Math.abs(steel.steelAreaM2 * 1e4 - areaCm2) / areaCm2).toBeLessThan(0.002);
    }
  });

  it('weighs what API says a plain end weighs, 10.69 (D − t) t, and at most its nominal weight', () => {
    for (const size of listedCasings()) {
      const { wallIn, steelAreaM2 } = casingSteel(size);
      const lbPerFt = (steelAreaM2 * 7850 * 0.3048) / 0.45359237;
      expect(lbPerFt / (10.69 * (size.odIn - wallIn) * wallIn)).toBeCloseTo(1, 3);
      expect(lbPerFt).toBeLessThan(size.lbPerFt);
    }
  });

  it('works an unlisted size out from its weight: within 5 % of the listed one next to it', () => {
    for (const size of listedCasings()) {
      const near = casingSteel({ odIn: size.odIn, lbPerFt: size.lbPerFt + 1e-6 });
      expect(near.listed).toBe(false);
      const ratio = near.steelAreaM2 / casingSteel(size).steelAreaM2;
      expect(ratio).toBeGreaterThan(1);
      expect(ratio).toBeLessThan(1.05);
    }
  });

  it('refuses what cannot be a pipe', () => {
    for (const size of [{ odIn: 0, lbPerFt: 23 }, { odIn: 7, lbPerFt: -1 }, { odIn: 2, lbPerFt: 50 }, { odIn: Number.NaN, lbPerFt: 20 }]) {
      expect(() => casingSteel(size)).toThrow(UserError);
    }
  });
});

describe('poleFromCasing', () => {
  it('is magnetisation times cross-section', () => {
    const [low, high] = poleFromCasing({ odIn: 7, lbPerFt: 23 }, [12_000, 100_000]);
    expect(low).toBeCloseTo(51.5, 1);
    expect(high).toBeCloseTo(429.4, 1);
  });

  it('refuses a range that is none', () => {
    expect(() => poleFromCasing({ odIn: 7, lbPerFt: 23 }, [5, 2])).toThrow(UserError);
    expect(() => poleFromCasing({ odIn: 7, lbPerFt: 23 }, [0, 2])).toThrow(UserError);
  });
});
