import { describe, expect, it } from 'vitest';
import { pointInArea } from '../../src/density/area.js';
import type { Area } from '../../src/density/types.js';
import { UserError } from '../../src/errors.js';
import { aliquotPolygon } from '../../src/geodesy/sections/aliquotPolygon.js';
import type { SectionLayer } from '../../src/geodesy/sections/sectionLayer.js';
import type { SectionReference } from '../../src/geodesy/sections/types.js';
import { Random } from '../../src/numerics/random.js';
import { distanceToAreaM } from '../../src/records/distanceToArea.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordSource } from '../../src/records/recordSource.js';
import { make, makeSection, mutate, soup } from './locationText/generate.js';
import { madeLayer } from './madeSections.js';
import { testSite } from './testSite.js';

/** 10,000 texts by default; IRONPLAT_FUZZ sets another number. */
const COUNT = Number(process.env['IRONPLAT_FUZZ'] ?? 10_000);
/** A call of 0 ft lies on the line, to rounding. */
const ON_LINE_M = 0.001;

const layer = madeLayer();
const home = (section: number): SectionReference => ({ township: 5, townshipDir: 'N', range: 1, rangeDir: 'E', section });
/** Every reference is taken to three sections about the parcel, so that the made texts have a ground to stand on and their parts come again. */
const everywhere: SectionLayer = {
  ...layer, count: () => 1, section: ({ section }, where) => layer.section(home(14 + (section % 3)), where),
};

function texts(make_: (random: Random) => string, seed: number): string[] {
  const random = new Random(seed);
  return Array.from({ length: COUNT }, () => make_(random));
}

function locate(list: readonly string[]): ReturnType<typeof locateRecords> {
  const table = { source: 'fuzz.csv', names: ['id', 'text'], rows: list.length, columns: new Map([['id', list.map((_, i) => String(i))], ['text', list]]) };
  const source: RecordSource = { kind: 'table', name: 'fuzz.csv', table, settings: { columns: { recordId: 'id', location: 'text' }, datum: 'NAD83', source: 'gps', westPositive: true } };
  try {
    return locateRecords([source], testSite(), { sections: everywhere });
  } catch (error) {
    // A slip that all rows share is the file's; nothing else may be thrown of rows that are only odd.
    if (error instanceof UserError) throw new Error(`the file as a whole was refused: ${error.message}`, { cause: error });
    throw error;
  }
}

function sectionArea(number: number): Area {
  return [[aliquotPolygon(layer.section(home(number), 'test'), { steps: [] })]];
}
const AREAS = Array.from({ length: 36 }, (_, i) => sectionArea(i + 1));

/** Places that rest on a section and lie outside of it. */
function outside(list: readonly string[], { placed }: ReturnType<typeof locateRecords>): string[] {
  return placed.filter(({ x, y, basis, density }) => {
    const named = /section (\d+), T\d/.exec(basis);
    if (!named) return false;
    const place = density.parts.find(({ role }) => role === 'place')!;
    const area = AREAS[Number(named[1]) - 1]!;
    return place.kind === 'area' ? !pointInArea(area, x, y) : distanceToAreaM(area, x, y) > ON_LINE_M;
  }).map(({ row, x, y, basis }) => `${list[row - 1]!} at ${x}, ${y}: ${basis}`);
}

describe(`location texts through the whole of locate (${COUNT}, IRONPLAT_FUZZ sets the number)`, () => {
  it('made by a grammar of sections lead into their sections', { timeout: 600_000 }, () => {
    const list = texts((random) => makeSection(random).text, 5);
    const found = locate(list);
    expect(outside(list, found)).toEqual([]);
    expect(found.placed.length + found.unplaced.length).toBe(COUNT);
    // Most name township, range and section; the others cannot be placed.
    expect(found.placed.length / COUNT).toBeGreaterThan(0.3);
    for (const { problem, advice, column } of found.unplaced) expect(problem !== '' && advice !== '' && column === 'text').toBe(true);
  });

  it('spoilt by slips, or in no order, are placed in their sections or not at all', { timeout: 600_000 }, () => {
    for (const list of [texts((random) => mutate(random, make(random).text, makeSection(random).text), 6), texts(soup, 7)]) {
      const found = locate(list);
      expect(outside(list, found)).toEqual([]);
      expect(found.placed.length + found.unplaced.length).toBe(COUNT);
      for (const { x, y, semiMajM, density } of found.placed) {
        expect(Number.isFinite(x + y + semiMajM) && Math.abs(density.parts.reduce((sum, part) => sum + part.weight, 0) - 1) < 1e-9).toBe(true);
      }
    }
  });
});
