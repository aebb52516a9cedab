import { UserError } from '../errors.js';
import { nearest } from '../nearest.js';
import type { TextTable } from './types.js';

/** The texts of a column. A name that is not there is a UserError `column_missing` that lists those that are. */
export function column(table: TextTable, name: string): readonly string[] {
  const texts = table.columns.get(name);
  if (texts) return texts;
  const near = nearest(name, table.names);
  throw new UserError({
    code: 'column_missing', where: table.source, found: `the columns ${table.names.join(', ')}`, wanted: `a column ${name}`,
    advice: near === null ? 'name the column in the survey file' : `perhaps ${near} is meant`,
  });
}
