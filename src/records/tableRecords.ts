import { UserError } from '../errors.js';
import type { Crs } from '../geodesy/types.js';
import type { TextTable } from '../table/types.js';
import { anglesOf, projectedOf } from './coordinateText.js';
import { mayLackZeros } from './digits.js';
import type { RawPlace, RawRecord } from './rawRecord.js';
import { mappedColumn, recordHead, type Cell } from './recordHead.js';
import type { RecordColumns } from './recordSource.js';

/** Said of a coordinate that is shorter than its column's others. */
const LACKS_ZEROS = 'fewer decimals than others of the file, read as rounded; if a program cut zeros off, the place is better than said';

/** Rows of a table with their coordinates as numbers. */
export function tableRecords(table: TextTable, settings: { columns: RecordColumns; crs: Crs | null; westPositive: boolean }): RawRecord[] {
  const { columns, westPositive } = settings;
  const stored = new Map<keyof RecordColumns, readonly string[]>();
  for (const [key, name] of Object.entries(columns) as Array<[keyof RecordColumns, string | undefined]>) {
    if (name !== undefined) stored.set(key, mappedColumn(table.columns, name, { key, source: table.source, names: table.names }));
  }
  const form = coordinateForm(table, settings);
  const [first, second] = (form === 'angles' ? ['latitude', 'longitude'] as const : ['easting', 'northing'] as const)
    .map((key) => mayLackZeros(stored.get(key)!.map((text) => text.trim())));
  return Array.from({ length: table.rows }, (_, i) => {
    const cell: Cell = (key) => (stored.get(key)?.[i] ?? '').trim();
    const head = recordHead(cell, { columns, row: i + 1 });
    return {
      ...head, note: first![i] || second![i] ? [head.note, LACKS_ZEROS].filter((text) => text !== '').join('; ') : head.note,
      ...(form === 'angles' ? anglesOf(cell, columns, westPositive) : projectedOf(cell, columns, settings.crs!)),
    };
  });
}

function coordinateForm(table: TextTable, { columns, crs }: { columns: RecordColumns; crs: Crs | null }): RawPlace['kind'] {
  const angles = columns.latitude !== undefined && columns.longitude !== undefined;
  const projected = columns.easting !== undefined && columns.northing !== undefined;
  if (angles === projected) {
    throw new UserError({
      code: 'key_missing', where: `${table.source}, columns`,
      found: angles ? 'both latitude and longitude and easting and northing' : 'neither latitude and longitude nor easting and northing',
      wanted: 'the columns of one pair', advice: `the file has ${table.names.join(', ')}`,
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
