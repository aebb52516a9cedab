import { describe, expect, it } from 'vitest';
import { areaM2, pointInArea } from '../../src/density/area.js';
import type { Area } from '../../src/density/types.js';
import { crs } from '../../src/geodesy/crs.js';
import type { WellRecord } from '../../src/records/types.js';
import type { Site } from '../../src/site/types.js';
import { recordLayers } from '../../src/survey/layers/recordLayers.js';

const SITE = { frame: crs('EPSG:26917') } as Site;
const X = 500_000;
const Y = 4_400_000;
const QUARTER_M = 402.336;
const SQUARE: Area = [[[[X, Y], [X + QUARTER_M, Y], [X + QUARTER_M, Y + QUARTER_M], [X, Y + QUARTER_M], [X, Y]]]];

function record(recordId: string, parts: WellRecord['density']['parts']): WellRecord {
  return {
    recordId, source: 'a.csv', row: 1, x: X, y: Y, density: { parts }, semiMajM: 10, semiMinM: 10, azimDeg: 0, posSdM: 4, datum: 'NAD83', shift: 'none', basis: '', note: '',
    group: null, pCasing: 0.8,
  };
}

describe('recordLayers', () => {
  const point = record('P', [{ kind: 'gaussian', role: 'place', weight: 1, x: X, y: Y, cov: [16, 0, 16] }]);

  it('has points and ellipses, and no areas where no record rests on one', () => {
    expect(recordLayers({ placed: [point], unplaced: [] }, SITE).map(({ name }) => name)).toEqual(['records', 'records_ellipses']);
  });

  it('draws the 95 % area of a quarter quarter section: 95 % of its 40 acres, inside it', () => {
    const area = record('A', [{ kind: 'area', role: 'place', weight: 1, area: SQUARE }]);
    const [, , layer] = recordLayers({ placed: [point, area], unplaced: [] }, SITE);
    expect(layer).toMatchObject({ name: 'records_areas', geometryType: 'MultiPolygon' });
    expect(layer!.features).toHaveLength(1);
    const drawn = (layer!.features[0]!.geometry as unknown as { coordinates: Area }).coordinates;
    expect(areaM2(drawn) / areaM2(SQUARE)).toBeGreaterThan(0.94);
    expect(areaM2(drawn) / areaM2(SQUARE)).toBeLessThanOrEqual(1.001);
    expect(pointInArea(drawn, X + QUARTER_M / 2, Y + QUARTER_M / 2)).toBe(true);
    expect(pointInArea(drawn, X - 5, Y + QUARTER_M / 2)).toBe(false);
  });
});
