import { UserError } from '../errors.js';
import { parseApiNumber } from './apiNumber.js';
import type { RawRecord } from './rawRecord.js';
import type { RecordSource } from './recordSource.js';

/** The row's API number as the standard writes it, null where it has none that can be read, and what is odd about it. */
export function apiRemarks(raw: RawRecord, source: RecordSource): { readonly apiNumber: string | null; readonly remarks: readonly string[] } {
  if (raw.apiNumber === '') return { apiNumber: null, remarks: [] };
  const { apiState } = source.settings;
  try {
    const { text, remarks } = parseApiNumber(raw.apiNumber, `${source.name}, row ${raw.row}`, apiState === undefined ? {} : { state: apiState });
    return { apiNumber: text, remarks };
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    const { wanted, advice } = error.complaint;
    return { apiNumber: null, remarks: [`no API number, wanted ${wanted}${advice ? `; ${advice}` : ''}`] };
  }
}
