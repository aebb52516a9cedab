import type { PropertyValue } from './types.js';

/** Values of a file's attributes as plain values: anything nested as JSON text. */
export function propertyValues(properties: Readonly<Record<string, unknown>>): Record<string, PropertyValue> {
  return Object.fromEntries(Object.entries(properties).map(([name, value]) => [name, plain(value)]));
}

function plain(value: unknown): PropertyValue {
  if (value === undefined || value === null) return null;
  if (typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') return value;
  if (typeof value === 'bigint') return Number(value);
  return JSON.stringify(value);
}
