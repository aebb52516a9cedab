import { UserError } from '../errors.js';
import type { Site } from '../site/types.js';
import { column } from '../table/column.js';
import { numberColumn } from '../table/numberColumn.js';
import { parseTimeColumn, type TimeStatement } from '../table/parseTimeColumn.js';
import type { TextTable } from '../table/types.js';
import type { ClockStatement, ReadingFile } from './readingSource.js';
import { readingPlaces } from './readingPlaces.js';

/** Readings as they stand in the files, joined and in time order; flat columns of one length. */
export interface RawReadings {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly heightM: Float64Array;
  /** NaN where no file tells times. */
  readonly timeS: Float64Array;
  readonly field: Float64Array;
  readonly line: Int32Array;
  /** Empty where a file has no column of lines; then `line` is −1 there. */
  readonly lineNames: readonly string[];
  /** How positions were moved, file by file, and the largest standard error of that on each axis, metres. */
  readonly shifts: readonly string[];
  readonly shiftSdM: number;
  readonly notes: readonly string[];
}

/**
 * Reads the mapped columns of all files and sorts the rows by time; rows without a time keep the order of the file.
 * A line's name counts within its file: the same name in two files is two lines.
 */
export function rawReadings(files: readonly ReadingFile[], site: Site, { timesNeeded }: { timesNeeded: boolean }): RawReadings {
  if (files.length === 0) throw new UserError({ code: 'no_data', where: 'reduce, files', found: 'no file of readings', wanted: 'at least one' });
  const notes: string[] = [];
  const names: string[] = [];
  const parts = files.map((file) => readFile(file, site, { timesNeeded, names, several: files.length > 1 }));
  const count = parts.reduce((sum, part) => sum + part.timeS.length, 0);
  const timeS = joined(parts.map((part) => part.timeS));
  const order = new Uint32Array(count).map((_, i) => i);
  let late = 0;
  for (let i = 1; i < count; i++) if (timeS[i]! < timeS[i - 1]!) late += 1;
  if (late > 0) {
    // Rows without a time stay behind the row before them.
    const key = timeS.slice();
    for (let i = 0; i < count; i++) if (Number.isNaN(key[i]!)) key[i] = i > 0 ? key[i - 1]! : -Infinity;
    order.sort((a, b) => key[a]! - key[b]! || a - b);
    notes.push(`Times run backwards at ${late} ${late === 1 ? 'row' : 'rows'}; readings were sorted by time.`);
  }
  const sorted = (columns: readonly Float64Array[]): Float64Array => {
    const all = joined(columns);
    return late > 0 ? Float64Array.from(order, (i) => all[i]!) : all;
  };
  return {
    count, lineNames: names, notes,
    shifts: [...new Set(parts.map((part) => part.shift))], shiftSdM: Math.max(...parts.map((part) => part.shiftSdM)),
    x: sorted(parts.map((part) => part.x)), y: sorted(parts.map((part) => part.y)), heightM: sorted(parts.map((part) => part.heightM)),
    timeS: sorted([timeS]), field: sorted(parts.map((part) => part.field)), line: Int32Array.from(sorted(parts.map((part) => part.line))),
  };
}

interface FileContext {
  readonly timesNeeded: boolean;
  readonly names: string[];
  readonly several: boolean;
}

function readFile(file: ReadingFile, site: Site, { timesNeeded, names, several }: FileContext) {
  const { table, columns } = file;
  const field = numberColumn(table, columns.field, { allowEmpty: true });
  const places = readingPlaces(file, site);
  if (timesNeeded && columns.time === undefined) {
    throw new UserError({
      code: 'key_missing', where: `columns of ${table.source}`, found: 'no column of times', wanted: '"time", since variation and drift are taken off by time',
      advice: 'for readings that are already corrected state "kind": "anomaly"',
    });
  }
  const timeS = columns.time === undefined
    ? new Float64Array(table.rows).fill(NaN)
    : readTimes(table, { time: columns.time, ...(columns.gpsWeek === undefined ? {} : { gpsWeek: columns.gpsWeek }) }, file);
  return { ...places, field, timeS, heightM: heights(file), line: lineNumbers(file, names, several) };
}

/** UTC seconds of a file's times, its clock set right. */
export function readTimes(table: TextTable, columns: { readonly time: string; readonly gpsWeek?: string }, clock: ClockStatement): Float64Array {
  const week = columns.gpsWeek !== undefined ? numberColumn(table, columns.gpsWeek, { allowEmpty: true }) : clock.gpsWeek;
  const statement: TimeStatement = { ...(clock.zone === undefined ? {} : { zone: clock.zone }), ...(week === undefined ? {} : { gpsWeek: week }) };
  const times = parseTimeColumn(column(table, columns.time), statement, { source: table.source, column: columns.time });
  const offset = clock.clockOffsetS ?? 0;
  return offset === 0 ? times : times.map((timeS) => timeS + offset);
}

function heights(file: ReadingFile): Float64Array {
  const { table, columns, sensorHeightM } = file;
  if (columns.height !== undefined) return numberColumn(table, columns.height);
  if (sensorHeightM !== undefined) return new Float64Array(table.rows).fill(sensorHeightM);
  throw new UserError({
    code: 'key_missing', where: table.source, found: 'no height of the sensor above ground', wanted: '"sensor_height_m", or a column for "height"',
    advice: 'depths and detection chances rest on it',
  });
}

function lineNumbers({ table, columns }: ReadingFile, names: string[], several: boolean): Float64Array {
  const line = new Float64Array(table.rows).fill(-1);
  if (columns.line === undefined) return line;
  const texts = column(table, columns.line);
  const known = new Map<string, number>();
  for (let i = 0; i < texts.length; i++) {
    const text = texts[i]!.trim();
    let index = known.get(text);
    if (index === undefined) {
      index = names.length;
      known.set(text, index);
      names.push(several && names.includes(text) ? `${table.source}/${text}` : text);
    }
    line[i] = index;
  }
  return line;
}

function joined(columns: readonly Float64Array[]): Float64Array {
  if (columns.length === 1) return columns[0]!;
  const all = new Float64Array(columns.reduce((sum, column) => sum + column.length, 0));
  let at = 0;
  for (const column of columns) {
    all.set(column, at);
    at += column.length;
  }
  return all;
}
