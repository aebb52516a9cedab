import { unitsOf, type QuantityUnit } from '../units.js';
import type { ObjectSchema, Schema } from './types.js';

/** A length, time, field or angle: a number in `unit`, or a string that names its unit. */
export function quantitySchema(unit: QuantityUnit, rest: Schema): Schema {
  return { type: 'number', 'x-unit': unit, ...rest };
}

/** Lowest and highest of a range, as two quantities. */
export function rangeSchema(unit: QuantityUnit, rest: Schema): Schema {
  return { type: 'array', items: quantitySchema(unit, {}), minItems: 2, maxItems: 2, ...rest };
}

/** A file, relative to the survey file. */
export function pathSchema(rest: Schema): Schema {
  return { type: 'string', minLength: 1, 'x-path': true, ...rest };
}

/** An object whose keys are all named: a misspelt key is refused instead of ignored. */
export function objectSchema(properties: Readonly<Record<string, Schema>>, rest: Omit<Schema, 'properties' | 'type'> = {}): ObjectSchema {
  return { type: 'object', properties, additionalProperties: false, ...rest };
}

/** The schema as it is published: a quantity may be a number or a string with a unit, and our own keywords are gone. */
export function publicSchema(schema: Schema): Record<string, unknown> {
  const { 'x-unit': unit, 'x-path': path, properties, items, additionalProperties, ...rest } = schema;
  const out: Record<string, unknown> = { ...rest };
  if (properties) out.properties = Object.fromEntries(Object.entries(properties).map(([key, inner]) => [key, publicSchema(inner)]));
  if (items) out.items = publicSchema(items);
  if (additionalProperties !== undefined) {
    out.additionalProperties = typeof additionalProperties === 'object' ? publicSchema(additionalProperties) : additionalProperties;
  }
  if (path) out.format = 'uri-reference';
  return unit ? publicQuantity(out, unit) : out;
}

function publicQuantity(plain: Record<string, unknown>, unit: QuantityUnit): Record<string, unknown> {
  const { title, description, default: fallback, examples, type, ...bounds } = plain;
  const about = Object.fromEntries(Object.entries({ title, description, default: fallback, examples }).filter(([, value]) => value !== undefined));
  const names = unitsOf(unit).map((name) => name.replace(/[.]/g, '\\.')).join('|');
  return {
    ...about,
    oneOf: [
      { type: type ?? 'number', ...bounds, description: `in ${unit}` },
      { type: 'string', pattern: `^\\s*[-+]?(\\d+\\.?\\d*|\\.\\d+)([eE][-+]?\\d+)?\\s*(${names})\\s*$` },
    ],
  };
}
