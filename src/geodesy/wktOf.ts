import { canonicalOf, type Canonical } from './canonical.js';
import { ELLIPSOIDS } from './ellipsoid.js';
import { registryRows } from './registryRows.js';
import type { Crs, Datum } from './types.js';

/** Names as ESRI's .prj files spell them. */
const GEOGRAPHIC: Readonly<Record<Datum, { gcs: string; datum: string; spheroid: string }>> = {
  NAD27: { gcs: 'GCS_North_American_1927', datum: 'D_North_American_1927', spheroid: 'Clarke_1866' },
  NAD83: { gcs: 'GCS_North_American_1983', datum: 'D_North_American_1983', spheroid: 'GRS_1980' },
  'NAD83(2011)': { gcs: 'GCS_NAD_1983_2011', datum: 'D_NAD_1983_2011', spheroid: 'GRS_1980' },
  'WGS 84': { gcs: 'GCS_WGS_1984', datum: 'D_WGS_1984', spheroid: 'WGS_1984' },
};
const UNIT_NAMES: Readonly<Record<Crs['unit'], string>> = { metre: 'Meter', 'US survey foot': 'Foot_US', foot: 'Foot', degree: 'Degree' };

/**
 * A system of the registry as one line of WKT 1 in ESRI's dialect, for a .prj file, with its EPSG code at the end (which
 * readers of the dialect that know no codes skip). `crsFromWkt` reads it back as the same system.
 */
export function wktOf(crs: Crs): string {
  const row = registryRows().get(crs.epsg);
  if (row === undefined) throw new Error(`${crs.code} is not of the registry`);
  const { gcs, datum, spheroid } = GEOGRAPHIC[row.datum];
  const { a, inverseFlattening } = ELLIPSOIDS[row.datum];
  const authority = `AUTHORITY["EPSG","${row.epsg}"]`;
  const base = `GEOGCS["${gcs}",DATUM["${datum}",SPHEROID["${spheroid}",${decimal(a)},${decimal(inverseFlattening)}]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]`;
  const projection = canonicalOf(row);
  if (projection === null) return `${base},${authority}]`;
  const { method, parameters } = esriProjection(projection, row.metresPerUnit);
  const list = parameters.map(([name, value]) => `PARAMETER["${name}",${decimal(value)}]`).join(',');
  const name = row.name.replace(/[^A-Za-z0-9]+/g, '_').replace(/_$/, '');
  return `PROJCS["${name}",${base}],PROJECTION["${method}"],${list},UNIT["${UNIT_NAMES[row.unit]}",${decimal(row.metresPerUnit)}],${authority}]`;
}

function esriProjection(p: Canonical, metresPerUnit: number): { method: string; parameters: [string, number][] } {
  const origin: [string, number][] = [['False_Easting', tidy(p.falseEastM / metresPerUnit)], ['False_Northing', tidy(p.falseNorthM / metresPerUnit)]];
  const meridian: [string, number] = ['Central_Meridian', p.lon0];
  const latitude: [string, number] = ['Latitude_Of_Origin', p.lat0];
  const parallel: [string, number] = ['Standard_Parallel_1', p.lat1];
  const scale: [string, number] = ['Scale_Factor', p.scale];
  switch (p.method) {
    case 'transverse_mercator': return { method: 'Transverse_Mercator', parameters: [...origin, meridian, scale, latitude] };
    case 'web_mercator': return { method: 'Mercator_Auxiliary_Sphere', parameters: [...origin, meridian, parallel, ['Auxiliary_Sphere_Type', 0]] };
    case 'albers': return { method: 'Albers', parameters: [...origin, meridian, parallel, ['Standard_Parallel_2', p.lat2], latitude] };
    case 'lambert': return {
      method: 'Lambert_Conformal_Conic',
      parameters: [...origin, meridian, parallel, ...(p.lat2 === p.lat1 ? [] : [['Standard_Parallel_2', p.lat2] as [string, number]]), ...(p.scale === 1 ? [] : [scale]), latitude],
    };
    case 'oblique_mercator': return {
      method: p.fromNaturalOrigin ? 'Hotine_Oblique_Mercator_Azimuth_Natural_Origin' : 'Hotine_Oblique_Mercator_Azimuth_Center',
      // The dialect has no grid angle of its own: it equals the azimuth in every system of the registry that it can say.
      parameters: [...origin, scale, ['Azimuth', tidy(((p.azimuth + 540) % 360) - 180)], ['Longitude_Of_Center', p.lon0], ['Latitude_Of_Center', p.lat0]],
    };
  }
}

/** EPSG's metres carry 15 digits, so a false easting that is whole in feet comes back whole. */
function tidy(value: number): number {
  return Number(value.toPrecision(13));
}

function decimal(value: number): string {
  return Number.isInteger(value) ? `${value}.0` : String(value);
}
