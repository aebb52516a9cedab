import geographiclib from 'geographiclib-geodesic';
import { describe, expect, it } from 'vitest';
import { pointInArea } from '../../src/density/area.js';
import { region95, type Region95 } from '../../src/density/region95.js';
import { aliquotPolygon } from '../../src/geodesy/sections/aliquotPolygon.js';
import { sectionLayer, type SectionLayer } from '../../src/geodesy/sections/sectionLayer.js';
import type { SectionFeatures } from '../../src/geodesy/sections/types.js';
import { Random } from '../../src/numerics/random.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { WellRecord } from '../../src/records/types.js';
import { madeSections, MADE_TOWNSHIPS } from './madeSections.js';
import { centreX, centreY, frame, testSite } from './testSite.js';

// The true sections are made; the layer that the program gets has their corners as somebody read them off a map. A surveyor
// measures from the true lines with a chain that is too long or too short, and writes whole feet. Nothing here draws from
// the covariance that is put to the test.

const FOOT_M = 1200 / 3937;
const TOWNSHIP = MADE_TOWNSHIPS.slice(0, 1);
/** 40 ft at 1:24,000: the radius within which the map standard wants 90 % of the points. */
const STANDARD_M = 12.192;
/** Scale of the frame here: metres on the ground are longer. */
const SCALE = (() => {
  const [x1, y1] = frame.forward(-80.2, 39.3 + 1 / 111_016 * 1000);
  return Math.hypot(x1 - centreX, y1 - centreY) / 1000;
})();

/** How far a corner is put off by a map: drawn within a disc, read to half a millimetre, the paper stretched. */
function mapSlip(random: Random): [number, number] {
  const [radius, angle] = [9 * Math.sqrt(random.uniform()), 2 * Math.PI * random.uniform()];
  const stretch = 4 * (2 * random.uniform() - 1);
  return [radius * Math.cos(angle) + 12 * (random.uniform() - 0.5) + stretch, radius * Math.sin(angle) + 12 * (random.uniform() - 0.5)];
}
const radii = ((random) => Array.from({ length: 20_000 }, () => Math.hypot(...mapSlip(random))).toSorted((a, b) => a - b))(new Random(99));
const toStandard = STANDARD_M / radii[18_000]!;

type Ring = number[][];
const ringOf = (features: SectionFeatures, i: number): Ring => (features.features[i]!.geometry as { coordinates: Ring[] }).coordinates[0]!;

/** The layer as it was digitised: neighbours keep their common corners. */
function digitised(truth: SectionFeatures, random: Random): SectionFeatures {
  const moved = new Map<string, number[]>();
  const features = truth.features.map((feature, i) => ({
    ...feature, geometry: {
      type: 'Polygon' as const, coordinates: [ringOf(truth, i).map(([x, y]) => {
        const key = `${x} ${y}`;
        const known = moved.get(key) ?? mapSlip(random).map((slip, axis) => [x!, y!][axis]! + slip * toStandard);
        moved.set(key, known);
        return known;
      })],
    },
  }));
  return { ...truth, features };
}

/** Ground distance to the nearest piece of a line of the ring, square to it; corners in the order of `madeSections`. */
const LINES = { S: [0, 1, 2], E: [2, 3, 4], N: [4, 5, 6], W: [6, 7, 8] } as const;
function measured(ring: Ring, side: keyof typeof LINES, [x, y]: readonly [number, number]): number {
  const [a, b, c] = LINES[side].map((i) => ring[i]!) as [number[], number[], number[]];
  const along = (p: number[], q: number[]): number => ((x - p[0]!) * (q[0]! - p[0]!) + (y - p[1]!) * (q[1]! - p[1]!)) / Math.hypot(q[0]! - p[0]!, q[1]! - p[1]!) ** 2;
  const [p, q] = along(a, b) <= 1 ? [a, b] : [b, c];
  return Math.abs((q[0]! - p[0]!) * (y - p[1]!) - (q[1]! - p[1]!) * (x - p[0]!)) / Math.hypot(q[0]! - p[0]!, q[1]! - p[1]!) / SCALE;
}

function locate(rows: readonly string[], layer: SectionLayer): readonly WellRecord[] {
  const table = { source: 'p.csv', names: ['loc'], rows: rows.length, columns: new Map([['loc', rows]]) };
  const { placed, unplaced } = locateRecords([{ kind: 'table', name: 'p.csv', table, settings: { columns: { location: 'loc' } } }], testSite(), { sections: layer });
  expect(unplaced).toEqual([]);
  return placed;
}

const share = (count: number, of: number): number => (100 * count) / of;

describe('of 10,000 wells 95 ± 1 % lie in the 95 % region of what records say in words', () => {
  it('by footage calls', { timeout: 60_000 }, () => {
    const random = new Random(5);
    let [inside, wells] = [0, 0];
    for (let round = 0; round < 140; round++) {
      const truth = madeSections(TOWNSHIP, 100 + round);
      const layer = sectionLayer(digitised(truth, random));
      const places: Array<readonly [number, number]> = [];
      const rows: string[] = [];
      for (let i = 0; i < 72; i++) {
        const section = i % 36;
        const ring = ringOf(truth, section);
        const mid = (axis: 0 | 1): number => ring.slice(0, 8).reduce((sum, p) => sum + p[axis]! / 8, 0);
        const place = [mid(0) + 1450 * (random.uniform() - 0.5), mid(1) + 1450 * (random.uniform() - 0.5)] as const;
        const written = (side: keyof typeof LINES): number => {
          const exact = measured(ring, side, place);
          // Line and well are each found to within some yards, a chain is off by at most 1 in 290: 3 m and 1 in 500 in the mean of squares.
          const taped = exact * (1 + (Math.sqrt(3) / 500) * (2 * random.uniform() - 1)) + 3 * Math.sqrt(1.5) * (2 * random.uniform() - 1 + 2 * random.uniform() - 1);
          return Math.round(Math.max(0, taped) / FOOT_M);
        };
        const [ns, ew] = [random.uniform() < 0.5 ? 'N' : 'S', random.uniform() < 0.5 ? 'E' : 'W'] as const;
        places.push(place);
        rows.push(`${written(ns)} F${ns}L ${written(ew)} F${ew}L Sec ${section + 1} T5N R1E`);
      }
      locate(rows, layer).forEach(({ density }, i) => {
        wells++;
        if (region95(density).contains(...places[i]!)) inside++;
      });
    }
    expect(wells).toBe(10_080);
    expect(Math.abs(share(inside, wells) - 95)).toBeLessThan(1);
  });

  it.each([['NE/4 SW/4', ['SW', 'NE']], ['', []]] as const)('by the part "%s" alone', (written, steps) => {
    const random = new Random(6);
    let [inside, wells] = [0, 0];
    for (let round = 0; round < 5; round++) {
      const truth = madeSections(TOWNSHIP, 300 + round);
      const layer = sectionLayer(digitised(truth, random));
      const real = sectionLayer(truth);
      const records = locate(Array.from({ length: 36 }, (_, i) => `${written} Sec ${i + 1} T5N R1E`), layer);
      records.forEach(({ density }, i) => {
        const ring = aliquotPolygon(real.section({ township: 5, townshipDir: 'N', range: 1, rangeDir: 'E', section: i + 1 }, 'test'), { steps });
        const region: Region95 = region95(density);
        const [xs, ys] = [ring.map((p) => p[0]), ring.map((p) => p[1])];
        const [west, east, south, north] = [Math.min(...xs), Math.max(...xs), Math.min(...ys), Math.max(...ys)];
        for (let n = 0; n < 56; ) {
          const [x, y] = [west + (east - west) * random.uniform(), south + (north - south) * random.uniform()];
          if (!pointInArea([[ring]], x, y)) continue;
          n++;
          wells++;
          if (region.contains(x, y)) inside++;
        }
      });
    }
    expect(wells).toBe(10_080);
    expect(Math.abs(share(inside, wells) - 95)).toBeLessThan(1);
  });

  it('by distances from the corner of a map, on the datum of the map', () => {
    const random = new Random(8);
    // The corner stands at 39°17'30" N 80°12'30" W of NAD27; what the test site does to NAD27 is undone by hand.
    const [cornerLat, cornerLon] = [39 + 17.5 / 60, -(80 + 12.5 / 60)];
    const earth = new geographiclib.Geodesic.Geodesic(6378206.4, 1 - 6356583.8 / 6378206.4);
    const places: Array<readonly [number, number]> = [];
    const rows = Array.from({ length: 10_000 }, () => {
      // All of them north and east of the corner.
      const place = [centreX + 1200 * (random.uniform() - 0.5), centreY + 1200 * (random.uniform() - 0.5)] as const;
      places.push(place);
      const slip = mapSlip(random);
      const [lon, lat] = frame.inverse(place[0] + slip[0] * toStandard, place[1] + slip[1] * toStandard);
      const [onMapLon, onMapLat] = [lon - 0.00019, lat - 0.00009];
      const north = earth.Inverse(cornerLat, cornerLon, onMapLat, cornerLon).s12!;
      const east = earth.Inverse(onMapLat, cornerLon, onMapLat, onMapLon).s12!;
      const feet = (m: number): string => `${Math.round(m / FOOT_M / 10) * 10}'`;
      return `${feet(north)} N of 39°17'30", ${feet(east)} E of 80°12'30"`;
    });
    const table = { source: 'p.csv', names: ['loc'], rows: rows.length, columns: new Map([['loc', rows]]) };
    const { placed } = locateRecords([{ kind: 'table', name: 'p.csv', table, settings: { columns: { location: 'loc' }, datum: 'NAD27', source: 'map', mapScale: 24_000 } }], testSite());
    expect(placed).toHaveLength(10_000);
    const inside = placed.filter(({ density }, i) => region95(density).contains(...places[i]!)).length;
    expect(Math.abs(share(inside, 10_000) - 95)).toBeLessThan(1);
  });
});
