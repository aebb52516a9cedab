import type { Geometry } from 'geojson';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { crs } from '../../../src/geodesy/crs.js';
import { aliquotPolygon } from '../../../src/geodesy/sections/aliquotPolygon.js';
import { groundPlane } from '../../../src/geodesy/sections/groundPlane.js';
import { placeFromCalls } from '../../../src/geodesy/sections/placeFromCalls.js';
import { sectionGeometry } from '../../../src/geodesy/sections/sectionGeometry.js';
import { geodesicAzimuthDeg, geodesicFrom, geodesicM, type LonLat } from './geodesicPlace.js';
import { calls, FT, MADE_FRAME, madeSection, polygonOf, SQUARE, type Feet } from './madeSection.js';

function complaint(geometry: Geometry | null): string {
  try {
    sectionGeometry(geometry, MADE_FRAME, { where: 'sections.geojson, feature 5' });
  } catch (error) {
    if (error instanceof UserError && error.code === 'polygon_invalid') return error.message;
    throw error;
  }
  return 'none';
}

describe('sectionGeometry', () => {
  it('finds the corners of a section that leans so that its box touches none of its lines but in corners', () => {
    const section = madeSection([[-2640, -2640], [2900, -2500], [2800, 2700], [-2740, 2560]]);
    const at = (side: 'N' | 'S', end: number): readonly [number, number] => section.vertices[section.lines[side].at(end)!]!.map((v) => v / FT) as unknown as [number, number];
    // The plane lies about the mean of the vertices, 80 ft east and 30 ft north of the place that the shape counts from.
    for (const [[e, n], want] of [[at('S', 0), [-2640, -2640]], [at('S', -1), [2900, -2500]], [at('N', -1), [2800, 2700]], [at('N', 0), [-2740, 2560]]] as const) {
      expect(Math.hypot(e - want[0]! + 80, n - want[1]! + 30)).toBeLessThan(0.5);
    }
  });

  it('takes a corner that is drawn as two vertices a yard apart for one', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2637], [2637, 2640], [-2640, 2640]]);
    expect(section.irregular).toEqual([]);
    // Near one line and far from the other too, where the piece between the two vertices, produced, would be nearest.
    for (const feet of [[660, 660], [4000, 30], [30, 4000]] as const) {
      const { x, y } = placeFromCalls(section, calls([feet[0], 'N'], [feet[1], 'E']));
      const { x: x0, y: y0 } = placeFromCalls(madeSection(SQUARE), calls([feet[0], 'N'], [feet[1], 'E']));
      expect(Math.hypot(x - x0, y - y0) / FT).toBeLessThan(3.1);
    }
  });

  it('drops vertices that repeat', () => {
    const twice = SQUARE.flatMap((p): Feet[] => [p, [p[0] + 0.1, p[1]]]);
    expect(madeSection(twice).vertices).toHaveLength(4);
  });

  it('refuses what is no section, and says which feature', () => {
    const square = polygonOf(SQUARE).coordinates[0]!;
    const hole = polygonOf(SQUARE.map(([e, n]): Feet => [e / 9, n / 9])).coordinates[0]!;
    const table: ReadonlyArray<readonly [string, Geometry | null, RegExp]> = [
      ['nothing', null, /no geometry/],
      ['a point', { type: 'Point', coordinates: square[0]! }, /a Point/],
      ['a hole', { type: 'Polygon', coordinates: [square, hole] }, /1 hole/],
      ['two pieces', { type: 'MultiPolygon', coordinates: [[square], [hole]] }, /2 pieces/],
      ['two vertices', polygonOf(SQUARE.slice(0, 2)), /without an area/],
      ['a line', polygonOf([[-2640, 0], [0, 0], [2640, 0]]), /without an area|no corner|would be/],
      ['a triangle', polygonOf(SQUARE.slice(0, 3)), /would be the|no corner/],
      ['a triangle with many vertices', polygonOf([[-2640, -2640], [0, -2640], [2640, -2640], [1320, 0], [0, 2640], [-1320, 0]]), /would be the|no corner/],
      ['a corner in a lake', polygonOf([[-2640, -2640], [2640, -2640], [2640, 500], [500, 2640], [-2640, 2640]]), /would be the|no corner/],
      ['a diamond', polygonOf([[0, -3700], [3700, 0], [0, 3700], [-3700, 0]]), /would be the|off west-east/],
      ['a disc', polygonOf(Array.from({ length: 72 }, (_, i): Feet => [2640 * Math.cos((i * Math.PI) / 36), 2640 * Math.sin((i * Math.PI) / 36)])), /no corner/],
      ['a vertex nowhere', { type: 'Polygon', coordinates: [[...square.slice(0, 2), [NaN, 5], square[0]!]] }, /finite/],
    ];
    for (const [name, geometry, words] of table) {
      expect(complaint(geometry), name).toMatch(words);
      expect(complaint(geometry), name).toContain('sections.geojson, feature 5');
    }
  });

  it('measures from the straight lines of a section whose north line follows a river, and from no other', () => {
    const river: Feet[] = [[2640, 2640], [1900, 2300], [1000, 2750], [0, 2250], [-1000, 2500], [-2640, 2640]];
    const section = madeSection([[-2640, -2640], [2640, -2640], ...river]);
    expect(section.irregular).toEqual(['N']);
    expect(section.notes.join()).toContain('N line is too crooked');
    expect(placeFromCalls(section, calls([660, 'S'], [660, 'E'])).cov[0]).toBeGreaterThan(0);
    expect(() => placeFromCalls(section, calls([660, 'N'], [660, 'E']))).toThrow(/north line of section 1, which is meandered/);
    // 4,950 ft north of the south line there is river here.
    expect(() => placeFromCalls(section, calls([4950, 'S'], [2640, 'E']))).toThrow(/lead out of section 1/);
    expect(() => aliquotPolygon(section, { steps: ['NE'] })).toThrow(/lots/);
    expect(aliquotPolygon(section, { steps: [] })).toHaveLength(9);
  });

  it('notes a line with two vertices that could be its quarter corner', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2640], [66, 2640], [-20, 2640], [-2640, 2640]]);
    expect(section.notes).toHaveLength(1);
    expect(section.vertices[section.quarters.N!]![0] / FT).toBeLessThan(0);
  });
});

describe('groundPlane', () => {
  it('keeps distances and azimuths of geodesics over a mile in State Plane, UTM and Mercator', () => {
    for (const epsg of [2270, 26910, 32123, 3857]) {
      const frame = crs(epsg);
      const middle: LonLat = epsg === 32123 ? [-82.1, 39.4] : [-119.3, 42.5];
      const plane = groundPlane(frame, ...frame.forward(...middle));
      for (const azimuth of [0, 33, 90, 170, 245, 300]) {
        const place = geodesicFrom(middle, azimuth, 1100);
        const [e, n] = plane.toPlane(...frame.forward(...place));
        // GRS 1980 and WGS 84 differ by a tenth of a millimetre in all.
        expect(Math.abs(Math.hypot(e, n) / geodesicM(middle, place) - 1)).toBeLessThan(2e-8);
        const bearing = (Math.atan2(e, n) * 180) / Math.PI;
        expect(Math.abs(Math.sin(((bearing - geodesicAzimuthDeg(middle, place)) * Math.PI) / 180))).toBeLessThan(1e-8);
        const back = plane.toFrame(e, n);
        expect(geodesicM(frame.inverse(...back), place)).toBeLessThan(1e-6);
      }
    }
  });
});
