import type { PropertyValue } from './types.js';

/** Values of a file's attributes as plain values: dates as `YYYY-MM-DD`, anything nested as JSON text. */
export function propertyValues(properties: Readonly<Record<string, unknown>>): Record<string, PropertyValue> {
  return Object.fromEntries(Object.entries(properties).map(([name, value]) => [name, plain(value)]));
}

function plain(value: unknown): PropertyValue {
  if (value === undefined || value === null) return null;
  if (typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') return value;
  if (typeof value === 'bigint') return Number(value);
  if (value instanceof Date) {
    // dBASE dates are read as local midnight, so the local calendar gives back the date that stands in the file.
    return Number.isNaN(value.getTime()) ? null : `${value.getFullYear()}-${two(value.getMonth() + 1)}-${two(value.getDate())}`;
  }
  return JSON.stringify(value);
}

function two(part: number): string {
  return String(part).padStart(2, '0');
}
