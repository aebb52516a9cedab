import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs, crsCodes } from '../../src/geodesy/crs.js';
import { crsFromWkt } from '../../src/geodesy/crsFromWkt.js';
import { wktOf } from '../../src/geodesy/wktOf.js';
import { parseWkt } from '../../src/geodesy/wktTree.js';

const GCS83 = 'GEOGCS["GCS_North_American_1983",DATUM["D_North_American_1983",SPHEROID["GRS_1980",6378137.0,298.257222101]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
const GCS27 = 'GEOGCS["GCS_North_American_1927",DATUM["D_North_American_1927",SPHEROID["Clarke_1866",6378206.4,294.9786982]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
const SOUTH = 'PROJECTION["Lambert_Conformal_Conic"],PARAMETER["False_Easting",1968500.0],PARAMETER["False_Northing",0.0],PARAMETER["Central_Meridian",-77.75],PARAMETER["Standard_Parallel_1",39.93333333333333],PARAMETER["Standard_Parallel_2",40.96666666666667],PARAMETER["Latitude_Of_Origin",39.33333333333334],UNIT["Foot_US",0.3048006096012192]';
const UTM17 = 'PROJECTION["Transverse_Mercator"],PARAMETER["False_Easting",500000.0],PARAMETER["False_Northing",0.0],PARAMETER["Central_Meridian",-81.0],PARAMETER["Scale_Factor",0.9996],PARAMETER["Latitude_Of_Origin",0.0],UNIT["Meter",1.0]';

/** Texts as the dialects spell them. */
const KNOWN: [string, number, string][] = [
  ['ESRI State Plane, parallels in the other order', 2272, `PROJCS["NAD_1983_StatePlane_Pennsylvania_South_FIPS_3702_Feet",${GCS83},${SOUTH}]`],
  ['ESRI with a name of its own', 2272, `PROJCS["our tract",${GCS83},${SOUTH}]`],
  ['ESRI UTM on NAD27', 26717, `PROJCS["NAD_1927_UTM_Zone_17N",${GCS27},${UTM17}]`],
  ['ESRI UTM on NAD83(2011)', 6346, `PROJCS["NAD_1983_2011_UTM_Zone_17N",GEOGCS["GCS_NAD_1983_2011",DATUM["D_NAD_1983_2011",SPHEROID["GRS_1980",6378137.0,298.257222101]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]],${UTM17}]`],
  ['ESRI geographic', 4267, GCS27],
  ['ESRI geographic WGS 84', 4326, 'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]'],
  ['ESRI web Mercator', 3857, 'PROJCS["WGS_1984_Web_Mercator_Auxiliary_Sphere",GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]],PROJECTION["Mercator_Auxiliary_Sphere"],PARAMETER["False_Easting",0.0],PARAMETER["False_Northing",0.0],PARAMETER["Central_Meridian",0.0],PARAMETER["Standard_Parallel_1",0.0],PARAMETER["Auxiliary_Sphere_Type",0.0],UNIT["Meter",1.0]]'],
  ['OGC with codes', 26917, 'PROJCS["NAD83 / UTM zone 17N",GEOGCS["NAD83",DATUM["North_American_Datum_1983",SPHEROID["GRS 1980",6378137,298.257222101,AUTHORITY["EPSG","7019"]],AUTHORITY["EPSG","6269"]],PRIMEM["Greenwich",0,AUTHORITY["EPSG","8901"]],UNIT["degree",0.0174532925199433,AUTHORITY["EPSG","9122"]],AUTHORITY["EPSG","4269"]],PROJECTION["Transverse_Mercator"],PARAMETER["latitude_of_origin",0],PARAMETER["central_meridian",-81],PARAMETER["scale_factor",0.9996],PARAMETER["false_easting",500000],PARAMETER["false_northing",0],UNIT["metre",1,AUTHORITY["EPSG","9001"]],AXIS["Easting",EAST],AXIS["Northing",NORTH],AUTHORITY["EPSG","26917"]]'],
  ['OGC oblique Mercator', 26731, 'PROJCS["NAD27 / Alaska zone 1",GEOGCS["NAD27",DATUM["North_American_Datum_1927",SPHEROID["Clarke 1866",6378206.4,294.978698213898]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]],PROJECTION["Hotine_Oblique_Mercator"],PARAMETER["latitude_of_center",57],PARAMETER["longitude_of_center",-133.666666666667],PARAMETER["azimuth",323.130102361111],PARAMETER["rectified_grid_angle",323.130102361111],PARAMETER["scale_factor",0.9999],PARAMETER["false_easting",16404166.67],PARAMETER["false_northing",-16404166.67],UNIT["US survey foot",0.304800609601219]]'],
  ['round brackets, line breaks', 26917, `PROJCS(\n  "UTM 17",\n  ${GCS83.replaceAll('[', '(').replaceAll(']', ')')},\n  ${UTM17.replaceAll('[', '(').replaceAll(']', ')')}\n)\n`],
  ['WKT 2 with a Michigan cone', 6201, 'PROJCRS["whatever",BASEGEOGCRS["NAD27",DATUM["North American Datum 1927",ELLIPSOID["Clarke 1866",6378206.4,294.978698213898,LENGTHUNIT["metre",1]]],PRIMEM["Greenwich",0,ANGLEUNIT["degree",0.0174532925199433]]],CONVERSION["Michigan CS27 Central zone",METHOD["Lambert Conic Conformal (2SP Michigan)",ID["EPSG",1051]],PARAMETER["Latitude of false origin",43.3166666666667,ANGLEUNIT["degree",0.0174532925199433]],PARAMETER["Longitude of false origin",-84.3333333333333,ANGLEUNIT["degree",0.0174532925199433]],PARAMETER["Latitude of 1st standard parallel",44.1833333333333,ANGLEUNIT["degree",0.0174532925199433]],PARAMETER["Latitude of 2nd standard parallel",45.7,ANGLEUNIT["degree",0.0174532925199433]],PARAMETER["Easting at false origin",2000000,LENGTHUNIT["US survey foot",0.304800609601219]],PARAMETER["Northing at false origin",0,LENGTHUNIT["US survey foot",0.304800609601219]],PARAMETER["Ellipsoid scaling factor",1.0000382,SCALEUNIT["unity",1]]],CS[Cartesian,2],AXIS["easting (X)",east,ORDER[1],LENGTHUNIT["US survey foot",0.304800609601219]],AXIS["northing (Y)",north,ORDER[2],LENGTHUNIT["US survey foot",0.304800609601219]]]'],
  ['WKT 2 with an ensemble', 4326, 'GEOGCRS["WGS 84",ENSEMBLE["World Geodetic System 1984 ensemble",MEMBER["World Geodetic System 1984 (Transit)"],ELLIPSOID["WGS 84",6378137,298.257223563,LENGTHUNIT["metre",1]],ENSEMBLEACCURACY[2.0]],PRIMEM["Greenwich",0,ANGLEUNIT["degree",0.0174532925199433]],CS[ellipsoidal,2],AXIS["latitude",north],AXIS["longitude",east],ANGLEUNIT["degree",0.0174532925199433],ID["EPSG",4326]]'],
  ['a compound of which the horizontal part counts', 26917, `COMPD_CS["x",PROJCS["NAD_1983_UTM_Zone_17N",${GCS83},${UTM17}],VERT_CS["NAVD88",VERT_DATUM["North American Vertical Datum 1988",2005],UNIT["metre",1]]]`],
  // One set of coordinates under two names: the name decides.
  ['New Jersey', 3424, twin('NAD_1983_StatePlane_New_Jersey_FIPS_2900_Feet')],
  ['New York East', 2260, twin('NAD_1983_StatePlane_New_York_East_FIPS_3101_Feet')],
];

function twin(name: string): string {
  return `PROJCS["${name}",${GCS83},PROJECTION["Transverse_Mercator"],PARAMETER["False_Easting",492125.0],PARAMETER["False_Northing",0.0],PARAMETER["Central_Meridian",-74.5],PARAMETER["Scale_Factor",0.9999],PARAMETER["Latitude_Of_Origin",38.83333333333334],UNIT["Foot_US",0.3048006096012192]]`;
}

function errorOf(run: () => unknown): UserError {
  try { run(); } catch (error) { if (error instanceof UserError) return error; throw error; }
  throw new Error('nothing was thrown');
}

describe('crsFromWkt', () => {
  it.each(KNOWN)('%s is EPSG:%i', (_, code, text) => {
    expect(crsFromWkt(text, 'parcel.prj').code).toBe(`EPSG:${code}`);
  });

  it.each([
    ['nothing', ''],
    ['no WKT', 'NAD27 UTM 17'],
    ['WKT that breaks off', `PROJCS["x",${GCS83},${UTM17}`],
    ['a local system', 'LOCAL_CS["site grid",LOCAL_DATUM["site",0],UNIT["metre",1]]'],
    ['a datum of its own', `PROJCS["x",${GCS83.replace('D_North_American_1983"', 'D_North_American_1983_HARN"')},${UTM17}]`],
    ['a realisation of WGS 84', 'GEOGCS["x",DATUM["World Geodetic System 1984 (G1762)",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]]'],
    ['NAD27 on the wrong ellipsoid', `PROJCS["x",${GCS27.replace('6378206.4,294.9786982', '6378137,298.257222101')},${UTM17}]`],
    ['another prime meridian', `PROJCS["x",${GCS27.replace('PRIMEM["Greenwich",0.0]', 'PRIMEM["Washington",-77.05]')},${UTM17}]`],
    ['an unknown method', `PROJCS["x",${GCS83},${UTM17.replace('Transverse_Mercator', 'Cassini')}]`],
    ['an unknown parameter', `PROJCS["x",${GCS83},${UTM17.replace('UNIT["Meter"', 'PARAMETER["XY_Plane_Rotation",12.0],UNIT["Meter"')}]`],
    ['a false easting of its own', `PROJCS["x",${GCS83},${UTM17.replace('500000.0', '500010.0')}]`],
    ['another meridian', `PROJCS["x",${GCS83},${UTM17.replace('-81.0', '-80.5')}]`],
    ['State Plane in yards', `PROJCS["x",${GCS83},${SOUTH.replace('"Foot_US",0.3048006096012192', '"Yard",0.9144')}]`],
    ['a code that its contents contradict', `PROJCS["x",${GCS83},${UTM17},AUTHORITY["EPSG","26718"]]`],
    ['a code on another datum', `PROJCS["x",${GCS83},${UTM17},AUTHORITY["EPSG","26717"]]`],
  ])('refuses %s', (_, text) => {
    const error = errorOf(() => crsFromWkt(text, 'parcel.prj'));
    expect(error.code).toBe('crs_unknown');
    expect(error.message).toMatch(/^parcel\.prj: found .*survey file/);
  });

  it('tells the two feet apart', () => {
    // State Plane Montana: 2256 in feet; the same in survey feet is no system, so it must not be taken for it.
    const feet = wktOf(crs(2256)).replace(/,AUTHORITY.*$/, ']');
    expect(crsFromWkt(feet, 'a.prj').epsg).toBe(2256);
    expect(errorOf(() => crsFromWkt(feet.replace('"Foot",0.3048]', '"Foot_US",0.3048006096012192]'), 'a.prj')).code).toBe('crs_unknown');
  });
});

describe('wktOf', () => {
  it('is read back as the same system, with its code and without, for the whole registry', () => {
    const misses: string[] = [];
    for (const [index, code] of crsCodes().entries()) {
      const text = wktOf(crs(code));
      if (crsFromWkt(text, 'a.prj').epsg !== code) misses.push(`${code}`);
      // Without its code a search through the registry is needed, so every third.
      if (index % 3 === 0 && crsFromWkt(text.replace(/,AUTHORITY\[[^\]]*\]/, ''), 'a.prj').epsg !== code) misses.push(`${code} without code`);
    }
    expect(misses).toEqual([]);
  });

  it('spells datums and units as .prj readers know them', () => {
    expect(wktOf(crs(32050))).toMatch(/^PROJCS\["NAD27_West_Virginia_North",GEOGCS\["GCS_North_American_1927",DATUM\["D_North_American_1927",SPHEROID\["Clarke_1866",6378206\.4,294\.97869821\d+\]\].*UNIT\["Foot_US",0\.3048006096012192\],AUTHORITY\["EPSG","32050"\]\]$/);
    expect(wktOf(crs(2272))).toContain('PARAMETER["False_Easting",1968500.0]');
    expect(wktOf(crs(6346))).toContain('DATUM["D_NAD_1983_2011",SPHEROID["GRS_1980",6378137.0,298.257222101]]');
    expect(wktOf(crs(2256))).toContain('UNIT["Foot",0.3048]');
    expect(wktOf(crs(4326))).toMatch(/^GEOGCS\["GCS_WGS_1984"/);
  });
});

describe('parseWkt', () => {
  it('keeps quotes within a text and words that stand alone', () => {
    expect(parseWkt('AXIS["a ""quoted"", bracketed ] name",north,ORDER[2]]')).toEqual({
      keyword: 'AXIS', values: ['a "quoted", bracketed ] name', 'north'], children: [{ keyword: 'ORDER', values: [2], children: [] }],
    });
    for (const text of ['A[', 'A[]', 'A[1,]', 'A[1]]', 'A[1] B[2]', '"A"[1]', 'A["x]']) expect(parseWkt(text)).toBeNull();
  });
});
