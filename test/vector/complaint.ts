import { UserError } from '../../src/errors.js';

/** The complaint that a promise ends with; anything else fails the test. */
export async function complaintOf(promise: Promise<unknown>): Promise<UserError['complaint']> {
  try {
    await promise;
  } catch (error) {
    if (error instanceof UserError) return error.complaint;
    throw error;
  }
  throw new Error('nothing was thrown');
}
