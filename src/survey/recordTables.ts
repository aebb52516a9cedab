import type { Records } from '../records/types.js';
import { recordRemarks, type RecordRemark } from '../report/recordRemarks.js';
import { writeCsv } from '../table/writeCsv.js';
import type { Delivered } from './deliver.js';

/** The decision log (one line a record) and the remarks, as CSV; a table without rows is not written. */
export function recordTables(role: string, records: Records): Delivered[] {
  const { log = [] } = records;
  const remarks = recordRemarks(records);
  const table = (name: string, title: string, content: Uint8Array): Delivered => ({ key: name, path: `${name}.csv`, title, mediaType: 'text/csv', roles: [role], content });
  const files: Delivered[] = [];
  if (log.length > 0) {
    files.push(table(`${role}_log`, 'Decision log: how each row became a place', writeCsv([
      ...columns(log),
      { name: 'read_as', texts: log.map(({ readAs }) => readAs) },
      { name: 'moved_by', texts: log.map(({ movedBy }) => movedBy) },
      { name: 'rests_on', texts: log.map(({ restsOn }) => restsOn) },
      { name: 'sure_to', texts: log.map(({ sureTo }) => sureTo) },
    ])));
  }
  if (remarks.length > 0) {
    files.push(table(`${role}_remarks`, 'Records to look at', writeCsv([
      { name: 'kind', texts: remarks.map(({ kind }) => kind) }, ...columns(remarks), { name: 'remark', texts: remarks.map(({ text }) => text) },
    ])));
  }
  return files;
}

type Row = Pick<RecordRemark, 'recordId' | 'source' | 'row'>;

function columns(rows: readonly Row[]) {
  return [
    { name: 'record_id', texts: rows.map(({ recordId }) => recordId) },
    { name: 'source', texts: rows.map(({ source }) => source) },
    { name: 'row', values: rows.map(({ row }) => row), decimals: 0 },
  ];
}
