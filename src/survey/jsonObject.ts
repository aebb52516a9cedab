import { UserError } from '../errors.js';

/** The object in a JSON text. `what` is what it should be, for messages. */
export function jsonObject(text: string, where: string, what: string): Record<string, unknown> {
  const refuse = (found: string): UserError => new UserError({ code: text.trim() === '' ? 'file_empty' : 'file_unreadable', where, found, wanted: `${what}: an object in JSON` });
  if (text.trim() === '') throw refuse('an empty file');
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    throw refuse(`text that is not JSON (${(error as Error).message})`);
  }
  if (value === null || typeof value !== 'object' || Array.isArray(value)) throw refuse('JSON that is no object');
  return value as Record<string, unknown>;
}
