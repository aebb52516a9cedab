import { Ajv2020, type ErrorObject } from 'ajv/dist/2020.js';
import { UserError } from '../errors.js';
import { nearest } from '../nearest.js';
import { quantity } from '../units.js';
import type { ObjectSchema, Schema } from './types.js';

/**
 * Reads what a user wrote against a schema: quantities to their unit, paths through `resolve`, defaults filled in.
 * The first thing that is wrong is answered with one sentence that names its key.
 *
 * @param where file (and section) that the value stands in, for messages
 */
export function readParameters(given: unknown, schema: ObjectSchema, options: { where: string; resolve(path: string): string }): Record<string, unknown> {
  const value = settle(given ?? {}, schema, options, '');
  const validate = new Ajv2020({ useDefaults: true, allErrors: false, strict: false, keywords: ['x-unit', 'x-path'] }).compile(schema);
  if (!validate(value)) throw complaint(validate.errors![0]!, value, schema, options.where);
  return value as Record<string, unknown>;
}

function settle(value: unknown, schema: Schema, options: { where: string; resolve(path: string): string }, key: string): unknown {
  if (value === undefined) return value;
  if (schema['x-unit']) return quantity(value, schema['x-unit'], at(options.where, key));
  if (schema['x-path'] && typeof value === 'string' && value) return options.resolve(value);
  if (schema.items && Array.isArray(value)) return value.map((item, i) => settle(item, schema.items!, options, `${key}[${i}]`));
  if (value !== null && typeof value === 'object' && !Array.isArray(value)) {
    return Object.fromEntries(Object.entries(value).map(([name, inner]) => {
      const open = typeof schema.additionalProperties === 'object' ? schema.additionalProperties : {};
      return [name, settle(inner, schema.properties?.[name] ?? open, options, key ? `${key}.${name}` : name)];
    }));
  }
  return value;
}

function complaint(error: ErrorObject, value: unknown, schema: Schema, where: string): UserError {
  const steps = error.instancePath.split('/').slice(1);
  const key = steps.map((step) => (/^\d+$/.test(step) ? `[${step}]` : `.${step}`)).join('').replace(/^\./, '');
  const parameters = error.params as Record<string, unknown>;
  if (error.keyword === 'required') {
    const missing = String(parameters.missingProperty);
    return new UserError({ code: 'key_missing', where: at(where, key), found: `no "${missing}"`, wanted: describe(follow(schema, [...steps, missing])) ?? 'this key' });
  }
  if (error.keyword === 'additionalProperties') {
    const extra = String(parameters.additionalProperty);
    const known = Object.keys(follow(schema, steps)?.properties ?? {});
    const close = nearest(extra, known);
    return new UserError({
      code: 'key_invalid', where: at(where, key), found: `the unknown key "${extra}"`,
      wanted: `one of ${known.join(', ')}`, ...(close ? { advice: `did you mean "${close}"?` } : {}),
    });
  }
  const found = JSON.stringify(steps.reduce<unknown>((inner, step) => (inner as Record<string, unknown>)?.[step], value)) ?? 'nothing';
  return new UserError({ code: 'key_invalid', where: at(where, key), found, wanted: wish(error) });
}

function wish({ keyword, params, message }: ErrorObject): string {
  const parameters = params as Record<string, unknown>;
  if (keyword === 'enum') return `one of ${(parameters.allowedValues as unknown[]).join(', ')}`;
  if (keyword === 'type') return `${parameters.type === 'object' || parameters.type === 'array' || parameters.type === 'integer' ? 'an' : 'a'} ${String(parameters.type)}`;
  if (parameters.comparison) return `a number ${String(parameters.comparison)} ${String(parameters.limit)}`;
  return (message ?? keyword).replace(/^must /, 'a value that must ');
}

function follow(schema: Schema, steps: readonly string[]): Schema | undefined {
  return steps.reduce<Schema | undefined>((inner, step) => {
    if (/^\d+$/.test(step)) return inner?.items;
    return inner?.properties?.[step] ?? (typeof inner?.additionalProperties === 'object' ? inner.additionalProperties : undefined);
  }, schema);
}

function describe(schema: Schema | undefined): string | undefined {
  return schema?.description ?? schema?.title;
}

function at(where: string, key: string): string {
  return key ? `${where}, ${key}` : where;
}
