import { UserError } from '../errors.js';
import { FLAGS, type Readings } from '../readings/types.js';
import type { Site } from '../site/types.js';
import { column } from '../table/column.js';
import { numberColumn } from '../table/numberColumn.js';
import { parseCsv } from '../table/parseCsv.js';
import { parseTimeColumn } from '../table/parseTimeColumn.js';
import { writeCsv, type CsvColumn } from '../table/writeCsv.js';

const POSITION_DECIMALS = 4;
const FIELD_DECIMALS = 3;
const TIME_DECIMALS = 3;
const HEIGHT_DECIMALS = 3;

/** What a CSV of readings cannot hold: kept beside it, so that the next stage starts from the same readings. */
export interface ReadingsHeader {
  readonly steps: readonly { readonly column: string; readonly title: string; readonly summary: string }[];
  readonly positionSdM: number;
  readonly positionCorrelationS: number;
  readonly warnings: readonly string[];
}

/** Reduced readings as CSV: positions in the unit of the frame, each step's field in a column named for the step. */
export function encodeReadings(readings: Readings, site: Site): { csv: Uint8Array; header: ReadingsHeader } {
  const scale = 1 / site.frame.metresPerUnit;
  const columns: CsvColumn[] = [
    { name: 'line_no', texts: Array.from(readings.line, (line) => readings.lineNames[line] ?? '') },
    { name: 'time_utc', utcS: readings.timeS, decimals: TIME_DECIMALS },
    { name: 'easting', values: readings.x.map((x) => x * scale), decimals: POSITION_DECIMALS },
    { name: 'northing', values: readings.y.map((y) => y * scale), decimals: POSITION_DECIMALS },
    { name: 'height_m', values: readings.heightM, decimals: HEIGHT_DECIMALS },
    { name: 'raw_nt', values: readings.raw, decimals: FIELD_DECIMALS },
    ...readings.steps.map(({ column: name, values }) => ({ name, values, decimals: FIELD_DECIMALS })),
    { name: 'resid_nt', values: readings.residual, decimals: FIELD_DECIMALS },
    { name: 'flag', texts: Array.from(readings.flag, (flag) => FLAGS[flag]!) },
  ];
  const { steps, positionSdM, positionCorrelationS, warnings } = readings;
  return {
    csv: writeCsv(columns),
    header: { steps: steps.map(({ column: name, title, summary }) => ({ column: name, title, summary })), positionSdM, positionCorrelationS, warnings },
  };
}

/** The readings that `encodeReadings` wrote, to the decimals written. */
export function decodeReadings(csv: Uint8Array, source: string, { header, site }: { header: ReadingsHeader; site: Site }): Readings {
  const table = parseCsv(csv, source);
  const scale = site.frame.metresPerUnit;
  const numbers = (name: string): Float64Array => numberColumn(table, name, { allowEmpty: true });
  const lineNames: string[] = [];
  const lineOf = new Map<string, number>();
  const line = Int32Array.from(column(table, 'line_no'), (name) => {
    if (!lineOf.has(name)) lineOf.set(name, lineNames.push(name) - 1);
    return lineOf.get(name)!;
  });
  const flag = Uint8Array.from(column(table, 'flag'), (word, row) => {
    const code = (FLAGS as readonly string[]).indexOf(word);
    if (code < 0) throw new UserError({ code: 'value_invalid', where: `${source}, row ${row + 1}, column flag`, found: `"${word}"`, wanted: `one of ${FLAGS.slice(1).join(', ')}, or nothing` });
    return code;
  });
  return {
    count: table.rows,
    x: numbers('easting').map((x) => x * scale),
    y: numbers('northing').map((y) => y * scale),
    heightM: numbers('height_m'),
    timeS: parseTimeColumn(column(table, 'time_utc'), {}, { source, column: 'time_utc' }),
    line, lineNames, raw: numbers('raw_nt'),
    steps: header.steps.map((step) => ({ ...step, values: numbers(step.column) })),
    residual: numbers('resid_nt'), flag,
    positionSdM: header.positionSdM, positionCorrelationS: header.positionCorrelationS, warnings: header.warnings,
  };
}
