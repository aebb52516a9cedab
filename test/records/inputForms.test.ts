import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings } from '../../src/records/recordSource.js';
import type { Site } from '../../src/site/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { testSite } from './testSite.js';

/** The published place lies near this one; the frame is UTM 17N on NAD83. */
function siteNear(lonDeg: number, latDeg: number): Site {
  const frame = crs('EPSG:26917');
  const [x, y] = frame.forward(lonDeg, latDeg);
  const parcel = [[[[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]].map(([sx, sy]) => [x + 300 * sx!, y + 300 * sy!] as const)]];
  return { ...testSite(), frame, parcel, open: parcel, shiftFrom: (from) => datumShift(from, 'NAD83') };
}

const ANGLES = { latitude: 'a', longitude: 'b' };
const GRID = { easting: 'a', northing: 'b' };

// 37°02′ N 79°58′ W on NAD27 → 37.0334725 N 79.966423889 W on NAD83, within 1.4e-7°: PROJ's test_cs2cs_datumfile (conus).
// Its UTM and State Plane coordinates on NAD27 are those of gdaltransform (GDAL 3.6.2 with PROJ), from EPSG:4267 to EPSG:26717 and EPSG:32047.
describe('37°02′ N 79°58′ W on NAD27 comes to the published place on NAD83', () => {
  it.each<{ form: string; rows: readonly [string, string]; settings: RecordFileSettings }>([
    { form: 'decimal degrees', rows: ['37.0333333333', '-79.9666666667'], settings: { columns: ANGLES, datum: 'NAD27' } },
    { form: 'degrees, minutes and seconds', rows: ['"37°02\'00.000"" N"', '"79°58\'00.000"" W"'], settings: { columns: ANGLES, datum: 'nad 1927' } },
    { form: 'degrees and minutes with a geographic CRS', rows: ['37 02.00000', '-79 58.00000'], settings: { columns: ANGLES, crs: crs('EPSG:4267') } },
    { form: 'UTM 17N', rows: ['591905.4080', '4098866.0662'], settings: { columns: GRID, crs: crs('EPSG:26717') } },
    { form: 'Virginia South in US survey feet', rows: ['1571895.6862', '258180.9786'], settings: { columns: GRID, crs: crs('EPSG:32047') } },
  ])('from $form', ({ rows, settings }) => {
    const site = siteNear(-79.9664, 37.0335);
    const table = parseCsv(`a,b\n${rows.join(',')}\n`, 'one.csv');
    const { placed, unplaced } = locateRecords([{ kind: 'table', name: 'one.csv', table, settings: { ...settings, errorM: 0 } }], site);
    expect(unplaced).toEqual([]);
    const [lon, lat] = site.frame.inverse(placed[0]!.x, placed[0]!.y);
    expect(Math.abs(lat - 37.0334725)).toBeLessThan(1.4e-7);
    expect(Math.abs(lon + 79.966423889)).toBeLessThan(1.4e-7);
    expect(placed[0]!.datum).toBe('NAD27');
    expect(placed[0]!.shift).toContain('conus');
  });
  it('and 39.3 N 80.2 W to 39.3000903 N', () => {
    const site = siteNear(-80.2, 39.3);
    const { placed } = locateRecords([{ kind: 'table', name: 'one.csv', table: parseCsv('a,b\n39.300000,-80.200000\n', 'one.csv'), settings: { columns: ANGLES, datum: 'NAD27', errorM: 0 } }], site);
    expect(site.frame.inverse(placed[0]!.x, placed[0]!.y)[1]).toBeCloseTo(39.3000903, 7);
  });
});
