import { UserError } from '../errors.js';
import type { Operation } from './types.js';

const WORD = /^[a-z][a-z0-9]*$/;
const KEY = /^[a-z][a-z0-9]*(_[a-z0-9]+)*$/;
const VERSION = /^\d+\.\d+\.\d+$/;
/** Words that are commands or keys of the survey file already. */
const TAKEN: ReadonlySet<string> = new Set(['run', 'simulate', 'check', 'describe', 'help', 'title', 'crs', 'date', 'seed', 'parcel', 'exclusions', 'grids', 'receiver', 'target']);

/** Refuses an operation of a caller's own that would not behave like a built-in one. Returns it typed. */
export function checkOperation(value: unknown, where: string): Operation {
  const operation = value as Operation;
  const fail = (found: string, wanted: string): never => {
    throw new UserError({ code: 'operation_invalid', where, found, wanted });
  };
  if (operation === null || typeof operation !== 'object') fail(String(value), 'an operation: an object with id, version, title, summary, parameters, inputs, outputs, sources, example and run');
  if (typeof operation.id !== 'string' || !WORD.test(operation.id)) fail(`the id ${JSON.stringify(operation.id)}`, 'one lower-case word');
  if (TAKEN.has(operation.id)) fail(`the id "${operation.id}"`, 'a word that is not a command or a key of the survey file already');
  const named = `operation "${operation.id}"`;
  if (typeof operation.version !== 'string' || !VERSION.test(operation.version)) fail(`${named} with version ${JSON.stringify(operation.version)}`, 'a semantic version such as "1.0.0"');
  for (const key of ['title', 'summary', 'example'] as const) {
    if (typeof operation[key] !== 'string' || operation[key] === '') fail(`${named} without ${key}`, `a ${key} in words`);
  }
  if (!Array.isArray(operation.sources)) fail(`${named} without sources`, 'a list of published sources, which may be empty');
  if (operation.parameters?.type !== 'object' || typeof operation.parameters.properties !== 'object') fail(`${named} without a parameter schema`, 'a JSON Schema of type object with properties');
  for (const key of Object.keys(operation.parameters.properties)) if (!KEY.test(key)) fail(`${named} with the parameter "${key}"`, 'keys in snake_case');
  for (const side of ['inputs', 'outputs'] as const) {
    if (operation[side] === null || typeof operation[side] !== 'object') fail(`${named} without ${side}`, 'slots by role, which may be none');
    for (const role of Object.keys(operation[side])) if (!KEY.test(role)) fail(`${named} with the role "${role}"`, 'roles in snake_case');
  }
  if (typeof operation.run !== 'function') fail(`${named} without run`, 'a function run(task) that returns outputs by role');
  return operation;
}
