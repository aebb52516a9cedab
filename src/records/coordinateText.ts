import { UserError } from '../errors.js';
import { parseAngle, type Axis, type ParsedAngle } from '../geodesy/parseAngle.js';
import type { Crs } from '../geodesy/types.js';
import { decimalsOf, numberText } from './digits.js';
import type { Fault, RawRecord } from './rawRecord.js';
import type { Cell } from './recordHead.js';
import type { RecordColumns } from './recordSource.js';

type Coordinates = Pick<RawRecord, 'place' | 'coordinates'>;

/** Latitude and longitude of a row, decimal or in degrees, minutes and seconds. */
export function anglesOf(cell: Cell, columns: RecordColumns, westPositive: boolean): Coordinates {
  const [lat, lon] = [cell('latitude'), cell('longitude')];
  const coordinates = { columns: `${columns.latitude}, ${columns.longitude}`, value: `${lat}, ${lon}` };
  const missing = missingCoordinate([columns.latitude!, lat], [columns.longitude!, lon]);
  if (missing) return { coordinates, place: missing };
  const latitude = angle(lat, 'latitude', columns.latitude!);
  if ('problem' in latitude) return { coordinates, place: latitude };
  const longitude = angle(lon, 'longitude', columns.longitude!);
  if ('problem' in longitude) return { coordinates, place: longitude };
  return {
    coordinates,
    place: {
      kind: 'angles', lonDeg: westPositive && !SAYS_SIDE.test(lon) ? -longitude.deg : longitude.deg, latDeg: latitude.deg,
      lonResolutionDeg: longitude.resolutionDeg, latResolutionDeg: latitude.resolutionDeg,
    },
  };
}

/** A longitude with a sign before it or a letter at either end says itself on which side of Greenwich it lies. */
const SAYS_SIDE = /^\s*[-+\u2212\u2010-\u2014\uFE63\uFF0D]|(?:^|[^a-z])[ew](?:ast|est)?\.?\s*$|^\s*[ew]/i;

/** An angle that nobody can read spoils its own row only, so the complaint becomes the row's fault. */
function angle(text: string, axis: Axis, columnName: string): ParsedAngle | Fault {
  try {
    return parseAngle(text, axis, columnName);
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    // An angle in the other one's column is an angle all the same; placing will tell what slip it is.
    const turned = otherAxis(text, axis, columnName);
    if (turned !== null) return turned;
    const { found, wanted, advice } = error.complaint;
    return { column: columnName, value: text, problem: `${found} is no ${axis}`, advice: `write ${wanted}${advice ? `; ${advice}` : ''}` };
  }
}

function otherAxis(text: string, axis: Axis, columnName: string): ParsedAngle | null {
  try {
    return parseAngle(text, axis === 'latitude' ? 'longitude' : 'latitude', columnName);
  } catch (error) {
    if (error instanceof UserError) return null;
    throw error;
  }
}

/** Easting and northing of a row in the unit of their CRS; a plain number ends where its last digit stands. */
export function projectedOf(cell: Cell, columns: RecordColumns, crs: Crs): Coordinates {
  const [east, north] = [cell('easting'), cell('northing')];
  const coordinates = { columns: `${columns.easting}, ${columns.northing}`, value: `${east}, ${north}` };
  const missing = missingCoordinate([columns.easting!, east], [columns.northing!, north]);
  if (missing) return { coordinates, place: missing };
  for (const [name, text] of [[columns.easting!, east], [columns.northing!, north]] as const) {
    if (!numberText.test(text)) {
      return { coordinates, place: { column: name, value: text, problem: `"${text}" is no number`, advice: `write the coordinate in the CRS's unit (${crs.unit}), digits and a point only` } };
    }
  }
  const unit = crs.metresPerUnit;
  return {
    coordinates,
    place: {
      kind: 'projected', eastM: Number(east) * unit, northM: Number(north) * unit,
      eastResolutionM: unit * 10 ** -decimalsOf(east), northResolutionM: unit * 10 ** -decimalsOf(north),
    },
  };
}

function missingCoordinate(...cells: Array<readonly [name: string, text: string]>): Fault | null {
  const empty = cells.filter(([, text]) => text === '').map(([name]) => name);
  if (empty.length === 0) return null;
  return {
    column: empty.join(', '), value: '', problem: 'the coordinates are not given', advice: 'fill them in from the permit, or place the well by hand',
    ...(empty.length === cells.length ? { absent: true as const } : {}),
  };
}
