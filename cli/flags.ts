import { Option } from 'commander';
import { UserError } from '../src/errors.js';
import { camelKey } from '../src/operations/camelKeys.js';
import type { ObjectSchema, Schema } from '../src/operations/types.js';

/** One flag a top-level key of the schema: `cell_m` is `--cell-m`; lists take commas, objects take JSON. */
export function flagsOf(schema: ObjectSchema): Option[] {
  return Object.entries(schema.properties).filter(([key]) => key !== '$schema').map(([key, property]) => {
    const flag = `--${key.replaceAll('_', '-')}`;
    const option = new Option(property.type === 'boolean' ? `${flag} [true|false]` : `${flag} <${placeholder(property)}>`, help(property));
    return property.enum ? option.choices(property.enum.map(String)) : option;
  });
}

/** What the flags said, under the keys of the schema; values still as a survey file would have them. */
export function valuesOf(schema: ObjectSchema, given: Readonly<Record<string, unknown>>): Record<string, unknown> {
  const out: Record<string, unknown> = {};
  for (const [key, property] of Object.entries(schema.properties)) {
    const text = given[camelKey(key)];
    if (text !== undefined) out[key] = valueOf(text, property, `--${key.replaceAll('_', '-')}`);
  }
  return out;
}

function valueOf(text: unknown, schema: Schema, flag: string): unknown {
  if (text === true) return true;
  const word = String(text);
  if (schema['x-unit'] || schema.type === 'number' || schema.type === 'integer') return numberOrText(word);
  if (schema.type === 'boolean') return word === 'true' ? true : word === 'false' ? false : word;
  const scalarItems = schema.type === 'array' && schema.items?.type !== 'object';
  if (scalarItems && !word.trimStart().startsWith('[')) return word.split(',').map((part) => valueOf(part.trim(), schema.items ?? {}, flag));
  if (schema.type === 'array' || schema.type === 'object') {
    try {
      return JSON.parse(word);
    } catch (error) {
      throw new UserError({ code: 'usage', where: flag, found: `${word} (${(error as Error).message})`, wanted: `an ${schema.type} in JSON` });
    }
  }
  return word;
}

function numberOrText(word: string): number | string {
  return word.trim() !== '' && Number.isFinite(Number(word)) ? Number(word) : word;
}

function placeholder(schema: Schema): string {
  if (schema['x-unit']) return schema['x-unit'];
  if (schema['x-path']) return 'file';
  if (schema.type === 'array') return schema.items?.type === 'object' ? 'json' : `${schema.items ? placeholder(schema.items) : 'value'},…`;
  return schema.type === 'object' ? 'json' : (schema.type ?? 'value');
}

function help(schema: Schema): string {
  const fallback = schema.default === undefined ? '' : ` (default: ${JSON.stringify(schema.default)})`;
  return `${schema.description ?? schema.title ?? ''}${fallback}`;
}
