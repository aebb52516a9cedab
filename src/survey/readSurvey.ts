import { UserError } from '../errors.js';
import { readParameters } from '../operations/readParameters.js';
import type { Operation } from '../operations/types.js';
import { jsonObject } from './jsonObject.js';
import { surveyFileSchema } from './surveySchema.js';

/** A survey file as read: common keys with quantities in their unit and paths resolved, and the raw sections. */
export interface Survey {
  readonly where: string;
  readonly common: Readonly<Record<string, unknown>>;
  readonly seed: number;
  /** Parameters of each operation as given (not yet validated); `false` leaves the operation out. */
  readonly sections: Readonly<Record<string, unknown>>;
  resolve(path: string): string;
}

/** Reads the survey file's text. `resolve` turns a path of the file into one that the host can read. */
export function readSurvey(text: string, where: string, options: { operations: readonly Operation[]; resolve(path: string): string }): Survey {
  return surveyFrom(jsonObject(text, where, 'a survey file'), where, options);
}

/** A survey from an object, as a program or the command line's flags give it. */
export function surveyFrom(given: Readonly<Record<string, unknown>>, where: string, options: { operations: readonly Operation[]; resolve(path: string): string }): Survey {
  const ids = new Set(options.operations.map(({ id }) => id));
  const common = readParameters(given, surveyFileSchema(options.operations), { where, resolve: options.resolve });
  const sections = Object.fromEntries(Object.entries(given).filter(([key]) => ids.has(key)));
  for (const [id, section] of Object.entries(sections)) {
    if (section !== false && (section === null || typeof section !== 'object' || Array.isArray(section))) {
      throw new UserError({ code: 'key_invalid', where: `${where}, ${id}`, found: JSON.stringify(section), wanted: 'an object with the parameters of the operation, or false to leave it out' });
    }
  }
  return {
    where, sections, resolve: options.resolve, seed: common.seed as number,
    common: Object.fromEntries(Object.entries(common).filter(([key]) => !ids.has(key))),
  };
}
