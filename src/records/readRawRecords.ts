import { featureRecords } from './featureRecords.js';
import type { RawRecord } from './rawRecord.js';
import { RECORD_FILE_DEFAULTS, type RecordSource } from './recordSource.js';
import { tableRecords } from './tableRecords.js';

/**
 * Rows of a file with their coordinates as numbers, read as they are asked for. What is wrong with one row becomes its
 * fault; what is wrong with the file as a whole (a column that is not there, no CRS) is a UserError.
 */
export function readRawRecords(source: RecordSource): Iterable<RawRecord> {
  const { columns = {}, crs = null, westPositive = RECORD_FILE_DEFAULTS.westPositive } = source.settings;
  if (source.kind === 'table') return tableRecords(source.table, { columns, crs, westPositive });
  return featureRecords(source.features, { columns, name: source.name, crs: source.crs });
}
