import { CANONICAL_DEFAULTS, type Canonical } from './canonical.js';
import type { Datum } from './types.js';
import { child, plainName, type WktNode } from './wktTree.js';

/** What a piece of WKT says of a horizontal system; `null` where it says something that is none of ours. */
export interface WktCrs {
  readonly name: string;
  readonly epsg: number | null;
  readonly datumName: string;
  readonly datum: Datum | null;
  readonly ellipsoidA: number;
  readonly inverseFlattening: number;
  readonly primeMeridianDeg: number;
  readonly projected: boolean;
  readonly unitName: string;
  readonly metresPerUnit: number;
  readonly methodName: string;
  readonly projection: Canonical | null;
}

/** Datum names without prefix, punctuation and case: EPSG's, ESRI's and the short ones. Realisations that are not ours are not here. */
const DATUM_NAMES: Readonly<Record<string, Datum>> = {
  northamericandatum1927: 'NAD27', northamerican1927: 'NAD27', nad27: 'NAD27', nad1927: 'NAD27',
  northamericandatum1983: 'NAD83', northamerican1983: 'NAD83', nad83: 'NAD83', nad1983: 'NAD83',
  nad832011: 'NAD83(2011)', nad19832011: 'NAD83(2011)', nad83nationalspatialreferencesystem2011: 'NAD83(2011)', nad83nsrs2011: 'NAD83(2011)',
  wgs84: 'WGS 84', wgs1984: 'WGS 84', worldgeodeticsystem1984: 'WGS 84', worldgeodeticsystem1984ensemble: 'WGS 84',
};

type Read = { readonly method: Canonical['method']; readonly fromNaturalOrigin?: boolean };
const METHODS: Readonly<Record<string, Read>> = {
  transversemercator: { method: 'transverse_mercator' }, gausskruger: { method: 'transverse_mercator' },
  lambertconformalconic: { method: 'lambert' }, lambertconformalconic1sp: { method: 'lambert' }, lambertconformalconic2sp: { method: 'lambert' },
  lambertconicconformal1sp: { method: 'lambert' }, lambertconicconformal2sp: { method: 'lambert' }, lambertconicconformal2spmichigan: { method: 'lambert' },
  albers: { method: 'albers' }, albersconicequalarea: { method: 'albers' }, albersequalarea: { method: 'albers' },
  hotineobliquemercator: { method: 'oblique_mercator', fromNaturalOrigin: true }, hotineobliquemercatorvarianta: { method: 'oblique_mercator', fromNaturalOrigin: true },
  hotineobliquemercatorazimuthnaturalorigin: { method: 'oblique_mercator', fromNaturalOrigin: true },
  hotineobliquemercatorazimuthcenter: { method: 'oblique_mercator' }, hotineobliquemercatorvariantb: { method: 'oblique_mercator' }, obliquemercator: { method: 'oblique_mercator' },
  mercatorauxiliarysphere: { method: 'web_mercator' }, popularvisualisationpseudomercator: { method: 'web_mercator' },
};

type Key = Exclude<keyof Canonical, 'method' | 'fromNaturalOrigin'>;
const PARAMETERS: Readonly<Record<string, Key>> = {
  latitudeoforigin: 'lat0', latitudeofnaturalorigin: 'lat0', latitudeoffalseorigin: 'lat0', latitudeofcenter: 'lat0', latitudeofprojectioncentre: 'lat0',
  centralmeridian: 'lon0', longitudeoforigin: 'lon0', longitudeofnaturalorigin: 'lon0', longitudeoffalseorigin: 'lon0', longitudeofcenter: 'lon0', longitudeofprojectioncentre: 'lon0',
  standardparallel1: 'lat1', latitudeof1ststandardparallel: 'lat1', standardparallel2: 'lat2', latitudeof2ndstandardparallel: 'lat2',
  scalefactor: 'scale', scalefactoratnaturalorigin: 'scale', scalefactoratprojectioncentre: 'scale', scalefactorattheprojectioncentre: 'scale', scalefactoroninitialline: 'scale', ellipsoidscalingfactor: 'scale',
  falseeasting: 'falseEastM', eastingatfalseorigin: 'falseEastM', eastingatprojectioncentre: 'falseEastM',
  falsenorthing: 'falseNorthM', northingatfalseorigin: 'falseNorthM', northingatprojectioncentre: 'falseNorthM',
  azimuth: 'azimuth', azimuthofinitialline: 'azimuth', azimuthatprojectioncentre: 'azimuth',
  rectifiedgridangle: 'gridAngle', anglefromrectifiedtoskewgrid: 'gridAngle',
};

const PROJECTED = ['PROJCS', 'PROJCRS', 'PROJECTEDCRS'];
const GEOGRAPHIC = ['GEOGCS', 'GEOGCRS', 'GEOGRAPHICCRS', 'GEODCRS', 'GEODETICCRS', 'BASEGEOGCRS', 'BASEGEODCRS'];
const DEG_PER_RAD = 180 / Math.PI;
const DEGREE_RAD = Math.PI / 180;

/** Reads the horizontal part of a WKT tree; null where it has none. */
export function readWktCrs(root: WktNode): WktCrs | null {
  if (['COMPD_CS', 'COMPOUNDCRS'].includes(root.keyword)) return fromFirst(root.children);
  if (root.keyword === 'BOUNDCRS') return fromFirst(child(root, 'SOURCECRS')?.children ?? []);
  const projected = PROJECTED.includes(root.keyword);
  if (!projected && !GEOGRAPHIC.includes(root.keyword)) return null;
  const geographic = projected ? child(root, ...GEOGRAPHIC) : root;
  const datum = child(geographic, 'DATUM', 'ENSEMBLE', 'GEODETICDATUM', 'TRF');
  const ellipsoid = child(datum, 'SPHEROID', 'ELLIPSOID');
  if (geographic === undefined || datum === undefined || ellipsoid === undefined) return null;
  const angular = child(geographic, 'UNIT', 'ANGLEUNIT') ?? child(child(geographic, 'AXIS'), 'UNIT', 'ANGLEUNIT');
  const linear = projected ? child(root, 'UNIT', 'LENGTHUNIT') ?? child(child(root, 'AXIS'), 'UNIT', 'LENGTHUNIT') : undefined;
  const degPerUnit = Number(angular?.values[1] ?? DEGREE_RAD) * DEG_PER_RAD;
  const metresPerUnit = Number(linear?.values[1] ?? NaN);
  const conversion = projected ? child(root, 'CONVERSION') ?? root : undefined;
  const methodName = String(child(conversion, 'METHOD', 'PROJECTION')?.values[0] ?? '');
  return {
    name: String(root.values[0] ?? ''), epsg: epsgOf(root), projected, datumName: String(datum.values[0] ?? ''),
    datum: DATUM_NAMES[plainName(String(datum.values[0]).replace(/^D_/i, ''))] ?? null,
    ellipsoidA: Number(ellipsoid.values[1]), inverseFlattening: Number(ellipsoid.values[2]), primeMeridianDeg: Number(child(geographic, 'PRIMEM', 'PRIMEMERIDIAN')?.values[1] ?? 0),
    unitName: String((projected ? linear : angular)?.values[0] ?? ''), metresPerUnit: projected ? metresPerUnit : 1, methodName,
    projection: conversion ? readProjection({ root, conversion, methodName, degPerUnit, metresPerUnit }) : null,
  };
}

function fromFirst(children: readonly WktNode[]): WktCrs | null {
  const found = children.find(({ keyword }) => [...PROJECTED, ...GEOGRAPHIC].includes(keyword));
  return found ? readWktCrs(found) : null;
}

function epsgOf(node: WktNode): number | null {
  const authority = child(node, 'AUTHORITY', 'ID');
  if (plainName(authority?.values[0]) !== 'epsg') return null;
  const code = Number(authority?.values[1]);
  return Number.isInteger(code) ? code : null;
}

interface Source {
  readonly root: WktNode;
  readonly conversion: WktNode;
  readonly methodName: string;
  readonly degPerUnit: number;
  readonly metresPerUnit: number;
}

/** Null where the method or one of its parameters is none of ours. */
function readProjection({ root, conversion, methodName, degPerUnit, metresPerUnit }: Source): Canonical | null {
  // WKT 1 has no name for web Mercator: it stands as an ellipsoidal Mercator with PROJ's words in an extension.
  const web = plainName(methodName) === 'mercator1sp' && /nadgrids=@null/.test(String(child(root, 'EXTENSION')?.values[1] ?? ''));
  const read = METHODS[web ? 'popularvisualisationpseudomercator' : plainName(methodName)];
  if (read === undefined) return null;
  const values: Partial<Record<Key, number>> = {};
  for (const node of conversion.children.filter(({ keyword }) => keyword === 'PARAMETER')) {
    const key = PARAMETERS[plainName(node.values[0])];
    const value = Number(node.values[1]);
    if (key === undefined) {
      if (value !== 0) return null;
      continue;
    }
    const own = child(node, 'LENGTHUNIT', 'ANGLEUNIT', 'SCALEUNIT', 'UNIT')?.values[1];
    const isLength = key === 'falseEastM' || key === 'falseNorthM';
    if (key === 'scale') values[key] = value * Number(own ?? 1);
    else if (isLength) values[key] = value * Number(own ?? metresPerUnit);
    else values[key] = value * (own === undefined ? degPerUnit : Number(own) * DEG_PER_RAD);
  }
  if (read.method === 'web_mercator') return { ...CANONICAL_DEFAULTS, method: 'web_mercator', lon0: values.lon0 ?? 0, falseEastM: values.falseEastM ?? 0, falseNorthM: values.falseNorthM ?? 0 };
  const lat1 = values.lat1 ?? (read.method === 'lambert' ? values.lat0 : undefined) ?? 0;
  return {
    ...CANONICAL_DEFAULTS, ...values, method: read.method, lat1, lat2: values.lat2 ?? lat1, gridAngle: values.gridAngle ?? values.azimuth ?? 0,
    fromNaturalOrigin: read.fromNaturalOrigin ?? false,
  };
}
