import { describe, expect, it } from 'vitest';
import { region95, type Region95 } from '../../src/density/region95.js';
import type { DensityPart } from '../../src/density/types.js';
import { pointScale } from '../../src/geodesy/convergence.js';
import { sectionLayer } from '../../src/geodesy/sections/sectionLayer.js';
import type { SectionFeatures } from '../../src/geodesy/sections/types.js';
import { Random } from '../../src/numerics/random.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { WellRecord } from '../../src/records/types.js';
import type { TextTable } from '../../src/table/types.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { madeSections } from './madeSections.js';
import { frame, testSite } from './testSite.js';

// Wells are drilled in the true sections, whose corners no one has. The layer's corners are read off a map; the calls are
// taped from the true lines. Nothing here draws from the density that is put to the test.

type Point = readonly [x: number, y: number];

const WELLS = 10_000;
/** As `sectionSdM`, `callSdM` and `callSdShare` have it unsaid. */
const [CORNER_SD_M, TAPE_SD_M, TAPE_SD_SHARE] = [5.7, 3, 1 / 500];

const even = (random: Random, sd: number): number => Math.sqrt(3) * sd * (2 * random.uniform() - 1);

/** Where a map puts a corner: three errors on each axis, each with an edge that it never passes. */
function mapped(features: SectionFeatures, random: Random): SectionFeatures {
  const moved = new Map<string, Point>();
  const slip = (): number => even(random, CORNER_SD_M / Math.sqrt(3)) + even(random, CORNER_SD_M / Math.sqrt(3)) + even(random, CORNER_SD_M / Math.sqrt(3));
  const move = ([x, y]: readonly number[]): [number, number] => {
    const key = `${x} ${y}`;
    // Neighbours have their corners in common.
    const place = moved.get(key) ?? [x! + slip(), y! + slip()] as const;
    moved.set(key, place);
    return [...place];
  };
  return { ...features, features: features.features.map(({ geometry, properties }) => ({
    properties, geometry: geometry?.type === 'Polygon' ? { ...geometry, coordinates: geometry.coordinates.map((ring) => ring.map(move)) } : geometry,
  })) };
}

/** A true section's corners and quarter corners: SW, S, SE, E, NE, N, NW, W. */
type Eight = readonly [Point, Point, Point, Point, Point, Point, Point, Point];

/** A place by shares of the way east and north in a four-sided figure, given from its south-west corner counter-clockwise. */
function within([sw, se, ne, nw]: readonly [Point, Point, Point, Point], u: number, v: number): Point {
  const mix = (k: 0 | 1): number => (1 - v) * ((1 - u) * sw[k] + u * se[k]) + v * ((1 - u) * nw[k] + u * ne[k]);
  return [mix(0), mix(1)];
}

/** Where the lines between opposite quarter corners meet. */
function centre([, s, , e, , n, , w]: Eight): Point {
  const [ax, ay, bx, by] = [n[0] - s[0], n[1] - s[1], e[0] - w[0], e[1] - w[1]];
  const t = ((w[0] - s[0]) * by - (w[1] - s[1]) * bx) / (ax * by - ay * bx);
  return [s[0] + t * ax, s[1] + t * ay];
}

function distanceToLine([x, y]: Point, line: readonly Point[]): number {
  const lengths = line.slice(1).map(([bx, by], i) => {
    const [ax, ay] = line[i]!;
    const [dx, dy] = [bx - ax, by - ay];
    const t = Math.min(1, Math.max(0, ((x - ax) * dx + (y - ay) * dy) / (dx * dx + dy * dy)));
    return Math.hypot(x - ax - t * dx, y - ay - t * dy);
  });
  return Math.min(...lengths);
}

interface Made { readonly truth: Point; readonly says: string }

interface Case {
  readonly name: string;
  /** Layers of 144 sections: wells of one section share the errors of its corners, which hardly weigh in an area. */
  readonly layers: number;
  make(corners: Eight, random: Random): Made;
}

const CASES: readonly Case[] = [
  {
    name: 'footage calls from lines that lie elsewhere', layers: 25,
    make: (corners, random) => {
      const [sw, s, se, e, ne, n, nw, w] = corners;
      const middle = centre(corners);
      const quarters = [[sw, s, middle, w], [s, se, e, middle], [middle, e, ne, n], [w, middle, n, nw]] as const;
      const quarter = random.integer(4);
      // As permits have it, a good way off the lines.
      const truth = within(quarters[quarter]!, 0.05 + 0.9 * random.uniform(), 0.05 + 0.9 * random.uniform());
      const scale = pointScale(frame, ...truth);
      const call = (line: readonly Point[]): number => {
        const distance = distanceToLine(truth, line) / scale;
        const taped = distance + even(random, TAPE_SD_M / Math.SQRT2) + even(random, TAPE_SD_M / Math.SQRT2) + even(random, distance * TAPE_SD_SHARE);
        return Math.max(1, Math.round(taped / US_SURVEY_FOOT_M));
      };
      const north = quarter >= 2 ? `${call([nw, n, ne])} FNL` : `${call([sw, s, se])} FSL`;
      const east = quarter === 1 || quarter === 2 ? `${call([se, e, ne])} FEL` : `${call([sw, w, nw])} FWL`;
      return { truth, says: `${north} ${east}` };
    },
  },
  {
    name: 'anywhere in a quarter quarter whose lines lie elsewhere', layers: 5,
    make: (corners, random) => {
      const [sw, s, , , , , , w] = corners;
      // The north-east quarter of the south-west quarter.
      return { truth: within([sw, s, centre(corners), w], 0.5 + 0.5 * random.uniform(), 0.5 + 0.5 * random.uniform()), says: 'NE/4 SW/4' };
    },
  },
  {
    name: 'anywhere in a section whose lines lie elsewhere', layers: 5,
    make: (corners, random) => {
      const [sw, , se, , ne, , nw] = corners;
      return { truth: within([sw, se, ne, nw], random.uniform(), random.uniform()), says: '' };
    },
  },
];

function locate(layer: SectionFeatures, rows: readonly string[]): readonly WellRecord[] {
  const columns = new Map([['id', rows.map((_, i) => `w${i}`)], ['where', [...rows]]]);
  const table: TextTable = { source: 'made.csv', names: [...columns.keys()], rows: rows.length, columns };
  const settings = { columns: { recordId: 'id', location: 'where' }, blunderShare: 0 };
  const { placed } = locateRecords([{ kind: 'table', name: 'made.csv', table, settings }], testSite(), { sections: sectionLayer(layer), maxDistanceM: 60_000 });
  expect(placed).toHaveLength(rows.length);
  return placed;
}

describe('the 95 % region of 10,000 records that rest on sections holds 95 ± 1 % of their wells', () => {
  it.each(CASES)('$name', ({ layers, make }) => {
    let [inRegion, inEllipse, stated] = [0, 0, 0];
    for (let seed = 1; seed <= layers; seed++) {
      const random = new Random(seed);
      const truth = madeSections(undefined, 100 + seed);
      const made = Array.from({ length: WELLS / layers }, () => {
        const { geometry, properties } = truth.features[random.integer(truth.features.length)]!;
        if (geometry?.type !== 'Polygon') throw new Error('made sections are polygons');
        const { says, ...rest } = make(geometry.coordinates[0]!.slice(0, 8) as unknown as Eight, random);
        return { ...rest, says: `${says} Sec ${properties.FRSTDIVNO} T${properties.TWNSHPNO} R${properties.RANGENO}`.trim() };
      });
      const records = locate(mapped(truth, random), made.map(({ says }) => says));
      // Records of one area have one region.
      const regions = new Map<DensityPart | object, Region95>();
      records.forEach(({ density, x, y, semiMajM, semiMinM, azimDeg, excess }, i) => {
        const [part] = density.parts;
        const key = part!.kind === 'area' ? part!.area : part!;
        const region = regions.get(key) ?? region95(density, { perSd: 6, acrossArea: 48 });
        regions.set(key, region);
        const [tx, ty] = made[i]!.truth;
        if (region.contains(tx, ty)) inRegion++;
        const azimuth = (azimDeg * Math.PI) / 180;
        const [dx, dy] = [tx - x, ty - y];
        if (((dx * Math.sin(azimuth) + dy * Math.cos(azimuth)) / semiMajM) ** 2 + ((dx * Math.cos(azimuth) - dy * Math.sin(azimuth)) / semiMinM) ** 2 <= 1) inEllipse++;
        stated += excess!.massHeld;
      });
    }
    expect(inRegion / WELLS).toBeGreaterThan(0.94);
    expect(inRegion / WELLS).toBeLessThan(0.96);
    expect(Math.abs(inEllipse - stated) / WELLS).toBeLessThan(0.01);
  });
});
