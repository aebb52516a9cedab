import { UserError } from '../errors.js';
import type { Fault, RawText } from './rawRecord.js';

/** A user's mistake as the fault of the cells that it lies in; anything else is thrown on. */
export function faultOf(error: unknown, { columns, value }: RawText): Fault {
  if (!(error instanceof UserError)) throw error;
  const { found, wanted, advice } = error.complaint;
  return { column: columns, value, problem: found, advice: `wanted ${wanted}${advice ? `; ${advice}` : ''}` };
}
