import { describe, expect, it } from 'vitest';
import { crs } from '../../../src/geodesy/crs.js';
import { pointScale } from '../../../src/geodesy/convergence.js';
import { sectionLayer } from '../../../src/geodesy/sections/sectionLayer.js';
import { aliquotPolygon } from '../../../src/geodesy/sections/aliquotPolygon.js';
import { placeFromCalls } from '../../../src/geodesy/sections/placeFromCalls.js';
import type { FootageCalls, Section, Side } from '../../../src/geodesy/sections/types.js';
import { US_SURVEY_FOOT_M } from '../../../src/units.js';
import { geodesicDistance, geodesicFrom, geodesicM, geodesicPlace, type LonLat } from './geodesicPlace.js';
import { FRAMES, haveRealSections, inFrame, NUMBERS, realFeatures, realLayer, realSection } from './realSections.js';

const FT = US_SURVEY_FOOT_M;
const SIDES: readonly Side[] = ['N', 'S', 'E', 'W'];
const PAIRS: ReadonlyArray<readonly [Side, Side]> = [['N', 'E'], ['N', 'W'], ['S', 'E'], ['S', 'W']];

function calls(feet: readonly [number, number], [a, b]: readonly [Side, Side]): FootageCalls {
  return [{ distanceM: feet[0] * FT, resolutionM: FT, from: a }, { distanceM: feet[1] * FT, resolutionM: FT, from: b }];
}

/** A line of a section as longitudes and latitudes, straight from the file's numbers. */
function lonLatLine(section: Section, feature: number, side: Side): LonLat[] {
  const ring = realFeatures()[feature]!.geometry.coordinates[0]!;
  const frame = section.plane.crs;
  return section.lines[side].map((index) => {
    const near = frame.inverse(...section.frameVertices[index]!);
    return ring.find((p) => geodesicM(p as unknown as LonLat, near) < 0.01) as unknown as LonLat;
  });
}

/** How far a place is from a line along an azimuth, by geodesics. */
function reach(place: LonLat, azimuthDeg: number, line: readonly LonLat[]): number {
  let along = 0;
  for (let round = 0; round < 30; round++) {
    const step = geodesicDistance(line, geodesicFrom(place, azimuthDeg, along));
    // The perpendicular runs from the line to the place: against the way before the line, with it behind the line.
    const ahead = -step.distanceM / Math.cos(((step.azimuthDeg - azimuthDeg) * Math.PI) / 180);
    along += ahead;
    if (Math.abs(ahead) < 1e-5) return along;
  }
  throw new Error('no line ahead');
}

/** The place that the same calls give when they are measured from the box around the vertices. */
function boxed(vertices: ReadonlyArray<readonly [number, number]>, feet: readonly [number, number], [a, b]: readonly [Side, Side]): [number, number] {
  const of = (axis: 0 | 1, pick: (...values: number[]) => number): number => pick(...vertices.map((v) => v[axis]));
  return [
    b === 'E' ? of(0, Math.max) - feet[1] * FT : of(0, Math.min) + feet[1] * FT,
    a === 'N' ? of(1, Math.max) - feet[0] * FT : of(1, Math.min) + feet[0] * FT,
  ];
}

function minus(a: readonly [number, number], b: readonly [number, number]): [number, number] {
  return [a[0] - b[0], a[1] - b[1]];
}

function ringArea(ring: ReadonlyArray<readonly [number, number]>): number {
  const [x0, y0] = ring[0]!;
  return ring.slice(1).reduce((sum, [x, y], i) => sum + ((ring[i]![0] - x0) * (y - y0) - (x - x0) * (ring[i]![1] - y0)) / 2, 0);
}

describe.skipIf(!haveRealSections)('real sections', () => {
  it('have sides as the layer\'s description says, by geodesics: 5,269 to 5,343 ft', () => {
    const layer = realLayer(2270);
    const lengths = NUMBERS.flatMap((number, i) => SIDES.map((side) => {
      const line = lonLatLine(realSection(layer, number), i, side);
      return line.slice(1).reduce((sum, p, k) => sum + geodesicM(line[k]!, p), 0) / FT;
    }));
    expect(Math.abs(Math.min(...lengths) - 5269)).toBeLessThan(1);
    expect(Math.abs(Math.max(...lengths) - 5343)).toBeLessThan(1);
  });

  it('have a quarter corner and two sixteenth corners on each line, next to its quarters', () => {
    for (const epsg of FRAMES) {
      const layer = realLayer(epsg);
      expect(layer.sections).toBe(3);
      expect(layer.notes).toEqual([]);
      for (const number of NUMBERS) {
        const section = realSection(layer, number);
        expect(section.irregular).toEqual([]);
        for (const side of SIDES) {
          expect(section.lines[side]).toHaveLength(5);
          expect(section.lines[side].indexOf(section.quarters[side]!)).toBe(2);
          expect(section.sixteenths[side].map((index) => section.lines[side].indexOf(index!))).toEqual([1, 3]);
        }
      }
    }
  });

  it('share lines with their neighbours, west and south', () => {
    const layer = realLayer(2270);
    const at = (number: number, side: Side): string[] => realSection(layer, number).lines[side].map((i) => realSection(layer, number).frameVertices[i]!.map((v) => v.toFixed(2)).join(' '));
    expect(at(3, 'W')).toEqual(at(4, 'E'));
    expect(at(4, 'S')).toEqual(at(9, 'N'));
  });

  it('give the place of a geodesic construction within 0.001 ft, in State Plane and in two UTM zones alike', () => {
    const feet: ReadonlyArray<readonly [number, number]> = [[660, 1980], [330, 990], [1980, 660], [2310, 2500], [100, 5000], [4620, 3300]];
    let worst = 0;
    let apart = 0;
    let scaleCost = 0;
    for (const [i, number] of NUMBERS.entries()) {
      for (const pair of PAIRS) {
        for (const distances of feet) {
          const places = FRAMES.map((epsg): LonLat => {
            const section = realSection(realLayer(epsg), number);
            const { x, y } = placeFromCalls(section, calls(distances, pair));
            return section.plane.crs.inverse(x, y);
          });
          const section = realSection(realLayer(2270), number);
          const built = geodesicPlace(
            [lonLatLine(section, i, pair[0]), lonLatLine(section, i, pair[1])], [distances[0] * FT, distances[1] * FT],
            section.plane.crs.inverse(...section.plane.toFrame(0, 0)),
          );
          for (const place of places) worst = Math.max(worst, geodesicM(place, built) / FT);
          for (const place of places) apart = Math.max(apart, geodesicM(place, places[0]!) / FT);
        }
      }
      const utm = realSection(realLayer(26910), number);
      scaleCost = Math.max(scaleCost, Math.abs(1980 * (pointScale(crs(26910), ...utm.frameVertices[0]!) - 1)));
    }
    // 0.05 ft is asked; measured 1.4e-5 and 1e-7 ft.
    expect(worst).toBeLessThan(1e-3);
    expect(apart).toBeLessThan(1e-4);
    // What the frame's scale alone would have done to 1,980 ft: the check can tell.
    expect(scaleCost).toBeGreaterThan(0.8);
  });

  it('give the same place for d from one line and L − d from the other, within 0.1 ft', () => {
    let worst = 0;
    for (const [i, number] of NUMBERS.entries()) {
      const section = realSection(realLayer(2270), number);
      const frame = section.plane.crs;
      const opposite: Readonly<Record<Side, Side>> = { N: 'S', S: 'N', E: 'W', W: 'E' };
      for (const pair of PAIRS) {
        for (const distances of [[660, 1980], [2640, 990], [4200, 4950], [130, 2700]] as const) {
          const first = placeFromCalls(section, calls(distances, pair));
          const place = frame.inverse(first.x, first.y);
          for (const k of [0, 1] as const) {
            // The measured line: perpendicular to the line called from, through the place, as far as the line opposite.
            const { azimuthDeg, distanceM } = geodesicDistance(lonLatLine(section, i, pair[k]), place);
            expect(Math.abs(distanceM / FT - distances[k])).toBeLessThan(0.01);
            const lengthFt = distances[k] + reach(place, azimuthDeg, lonLatLine(section, i, opposite[pair[k]])) / FT;
            const turned: [Side, Side] = k === 0 ? [opposite[pair[0]], pair[1]] : [pair[0], opposite[pair[1]]];
            const turnedFeet: [number, number] = k === 0 ? [lengthFt - distances[0], distances[1]] : [distances[0], lengthFt - distances[1]];
            const second = placeFromCalls(section, calls(turnedFeet, turned));
            worst = Math.max(worst, Math.hypot(second.x - first.x, second.y - first.y) / FT);
          }
        }
      }
    }
    expect(worst).toBeLessThan(0.1);
    // Lines that converge do not give it exactly: this is the geometry, not rounding.
    expect(worst).toBeGreaterThan(1e-3);
  });

  it('would be read up to tens of feet wrong from their bounding boxes', () => {
    const errors: Record<'true north' | 'state plane', number[]> = { 'true north': [], 'state plane': [] };
    for (const number of NUMBERS) {
      const section = realSection(realLayer(2270), number);
      for (const pair of PAIRS) {
        for (const distances of [[660, 660], [660, 1980], [1980, 660], [1980, 1980], [330, 2310]] as const) {
          const real = placeFromCalls(section, calls(distances, pair));
          const [e, n] = section.plane.toPlane(real.x, real.y);
          errors['true north'].push(Math.hypot(...minus(boxed(section.vertices, distances, pair), [e, n])) / FT);
          errors['state plane'].push(Math.hypot(...minus(boxed(section.frameVertices, distances, pair), [real.x, real.y])) / FT);
        }
      }
    }
    const largest = (list: readonly number[]): number => Math.max(...list);
    const rms = (list: readonly number[]): number => Math.sqrt(list.reduce((sum, v) => sum + v * v, 0) / list.length);
    // From a box along true north 28 ft (rms) and up to 55 ft; from one along the grid, 0.8° askew here, 77 ft and up to 128 ft.
    expect(Math.abs(rms(errors['true north']) - 28.4)).toBeLessThan(0.5);
    expect(Math.abs(largest(errors['true north']) - 55.3)).toBeLessThan(0.5);
    expect(Math.abs(rms(errors['state plane']) - 76.7)).toBeLessThan(0.5);
    expect(Math.abs(largest(errors['state plane']) - 127.6)).toBeLessThan(0.5);
  });

  it('give one place from all four pairs of calls, each with the distance that the place has from its line', () => {
    for (const [i, number] of NUMBERS.entries()) {
      const section = realSection(realLayer(26911), number);
      const first = placeFromCalls(section, calls([1320, 2200], ['N', 'E']));
      const place = section.plane.crs.inverse(first.x, first.y);
      const feet = Object.fromEntries(SIDES.map((side) => [side, geodesicDistance(lonLatLine(section, i, side), place).distanceM / FT])) as Record<Side, number>;
      for (const pair of PAIRS) {
        const again = placeFromCalls(section, calls([feet[pair[0]], feet[pair[1]]], pair));
        expect(Math.hypot(again.x - first.x, again.y - first.y) / FT).toBeLessThan(1e-3);
      }
    }
  });

  it('are found by a place in them', () => {
    const layer = realLayer(2270);
    for (const number of NUMBERS) {
      const section = realSection(layer, number);
      const { x, y } = placeFromCalls(section, calls([20, 900], ['N', 'W']));
      expect(layer.sectionsAt(x, y)).toEqual([
        { township: 35, townshipHalf: false, townshipDir: 'S', range: 29, rangeHalf: false, rangeDir: 'E', section: number, meridian: '33' },
      ]);
    }
    const shared = realSection(layer, 4);
    const corner = shared.frameVertices[shared.lines.S.at(-1)!]!;
    expect(layer.sectionsAt(...corner).map(({ section }) => section)).toEqual([3, 4, 9]);
    expect(layer.sectionsAt(corner[0] + 5000, corner[1])).toEqual([]);
    expect(layer.sectionsAt(NaN, NaN)).toEqual([]);
  });

  it('are the sum of their parts', () => {
    for (const number of NUMBERS) {
      const section = realSection(realLayer(2270), number);
      const area = (steps: Parameters<typeof aliquotPolygon>[1]['steps']): number => ringArea(aliquotPolygon(section, { steps }));
      const whole = area([]);
      for (const steps of [['NE', 'NW', 'SE', 'SW'], ['N2', 'S2'], ['E2', 'W2']] as const) {
        expect(Math.abs(steps.reduce((sum, s) => sum + area([s]), 0) / whole - 1)).toBeLessThan(1e-8);
        for (const first of ['NE', 'SW', 'N2', 'W2'] as const) {
          expect(Math.abs(steps.reduce((sum, s) => sum + area([first, s]), 0) / area([first]) - 1)).toBeLessThan(2e-7);
        }
      }
    }
  });

  it('use the sixteenth corners of the layer, which lie off the middles by feet', () => {
    const section = realSection(realLayer(2270), 3);
    const ring = aliquotPolygon(section, { steps: ['NE', 'NE'] });
    const [x, y] = section.frameVertices[section.sixteenths.E[1]!]!;
    expect(Math.min(...ring.map((p) => Math.hypot(p[0] - x, p[1] - y)))).toBeLessThan(1e-6);
    const vertex = (i: number | null): LonLat => section.plane.crs.inverse(...section.frameVertices[i!]!);
    const halves = [geodesicM(vertex(section.quarters.E), vertex(section.sixteenths.E[1])), geodesicM(vertex(section.sixteenths.E[1]), vertex(section.lines.E.at(-1)!))];
    expect(Math.abs(halves[0]! - halves[1]!) / FT).toBeGreaterThan(10);
  });

  it('place a call of a quarter from the quarter\'s lines', () => {
    const features = realFeatures();
    for (const [i, number] of NUMBERS.entries()) {
      const section = realSection(realLayer(26911), number);
      const frame = section.plane.crs;
      const place = placeFromCalls(section, calls([330, 990], ['S', 'W']), { steps: ['NE'] });
      // Quarter lines by geodesics between opposite quarter corners; their crossing need not be known.
      const corner = (side: Side): LonLat => frame.inverse(...section.frameVertices[section.quarters[side]!]!);
      // From the sixteenth corner in the upper half of the east line, 200 m into the quarter.
      const middle = features[i]!.geometry.coordinates[0]![2] as unknown as LonLat;
      const built = geodesicPlace([[corner('W'), corner('E')], [corner('S'), corner('N')]], [330 * FT, 990 * FT], geodesicFrom(middle, 280, 200));
      expect(geodesicM(frame.inverse(place.x, place.y), built) / FT).toBeLessThan(0.01);
    }
  });

  it('do not change when the polygon starts elsewhere or runs the other way', () => {
    const [feature] = realFeatures();
    const there = placeFromCalls(realSection(realLayer(2270), 3), calls([660, 1980], ['N', 'E']));
    const ring = feature!.geometry.coordinates[0]!.slice(0, -1);
    for (let start = 0; start < ring.length; start++) {
      const moved = [...ring.slice(start), ...ring.slice(0, start)];
      for (const turned of [moved, moved.toReversed()]) {
        const layer = inFrame([{ ...feature!, geometry: { type: 'Polygon', coordinates: [[...turned, turned[0]!]] } }], 2270);
        const here = placeFromCalls(realSection(sectionLayer(layer), 3), calls([660, 1980], ['N', 'E']));
        expect(Math.hypot(here.x - there.x, here.y - there.y)).toBeLessThan(1e-6);
      }
    }
  });
});
