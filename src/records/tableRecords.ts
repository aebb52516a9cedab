import { UserError } from '../errors.js';
import type { Crs } from '../geodesy/types.js';
import type { TextTable } from '../table/types.js';
import { anglesOf, projectedOf } from './coordinateText.js';
import { mayLackZeros } from './digits.js';
import type { RawPlace, RawRecord } from './rawRecord.js';
import { hasLocationColumns } from './locationColumns.js';
import { cellColumns, groupColumns, groupText, mappedColumn, recordHead, type Cell } from './recordHead.js';
import type { RecordColumns } from './recordSource.js';

/** Said of a coordinate that is shorter than its column's others. */
const LACKS_ZEROS = 'fewer decimals than others of the file, read as rounded; if a program cut zeros off, the place is better than said';

/** Rows of a table with their coordinates as numbers, one at a time. */
export function* tableRecords(table: TextTable, settings: { columns: RecordColumns; crs: Crs | null; westPositive: boolean }): Generator<RawRecord> {
  const { columns, westPositive } = settings;
  const about = (key: string): Parameters<typeof mappedColumn>[2] => ({ key, source: table.source, names: table.names });
  const stored = new Map(cellColumns(columns).map(([key, name]) => [key, mappedColumn(table.columns, name, about(key))]));
  const groups = groupColumns(columns).map((name) => mappedColumn(table.columns, name, about('group')));
  const form = coordinateForm(table, settings);
  const [first, second] = form === null ? [] : (form === 'angles' ? ['latitude', 'longitude'] as const : ['easting', 'northing'] as const)
    .map((key) => mayLackZeros(stored.get(key)!.map((text) => text.trim())));
  for (let i = 0; i < table.rows; i++) {
    const cell: Cell = (key) => (stored.get(key)?.[i] ?? '').trim();
    const head = recordHead(cell, { columns, row: i + 1 });
    yield {
      ...head, note: first?.[i] || second?.[i] ? [head.note, LACKS_ZEROS].filter((text) => text !== '').join('; ') : head.note,
      group: groupText(groups.map((cells) => cells[i]!.trim())),
      ...(form === null ? { place: null, coordinates: { columns: '', value: '' } }
        : form === 'angles' ? anglesOf(cell, columns, westPositive) : projectedOf(cell, columns, settings.crs!)),
    };
  }
}

/** Null for a file that has its places in words only. */
function coordinateForm(table: TextTable, { columns, crs }: { columns: RecordColumns; crs: Crs | null }): RawPlace['kind'] | null {
  const angles = columns.latitude !== undefined && columns.longitude !== undefined;
  const projected = columns.easting !== undefined && columns.northing !== undefined;
  const none = columns.latitude === undefined && columns.longitude === undefined && columns.easting === undefined && columns.northing === undefined;
  if (none && hasLocationColumns(columns)) return null;
  if (angles === projected) {
    throw new UserError({
      code: 'key_missing', where: `${table.source}, columns`,
      found: angles ? 'both latitude and longitude and easting and northing' : 'neither latitude and longitude nor easting and northing',
      wanted: 'the columns of one pair, or of a location in words', advice: `the file has ${table.names.join(', ')}`,
    });
  }
  if (angles && crs?.kind === 'projected') {
    throw new UserError({
      code: 'key_invalid', where: `${table.source}, crs`, found: `${crs.code} (${crs.name}), a projected CRS, for columns of latitude and longitude`,
      wanted: 'a datum instead of the CRS, or columns of easting and northing',
    });
  }
  if (projected && crs?.kind !== 'projected') {
    throw new UserError({
      code: 'crs_missing', where: `${table.source}, crs`, found: crs === null ? 'no CRS' : `${crs.code}, a geographic CRS`,
      wanted: 'the projected CRS that easting and northing are in, as in "crs": "EPSG:32017"',
    });
  }
  return angles ? 'angles' : 'projected';
}
