import type { Feature, Field } from './types.js';

/**
 * The value that every format writes for a field, so that they all tell the same: null for none and for NaN, a real
 * rounded to the field's decimals, an integer as it is.
 */
export function cellValue(field: Field, feature: Feature): string | number | null {
  const value = feature.values[field.name];
  if (value === undefined || value === null || typeof value === 'string') return value ?? null;
  if (Number.isNaN(value)) return null;
  return field.decimals === undefined ? plus(value) : plus(roundTo(value, field.decimals));
}

/** Rounded to a number of decimals, halves away from zero; as it is where it has no digits beyond them. */
export function roundTo(value: number, decimals: number): number {
  const scale = 10 ** decimals;
  const scaled = Math.abs(value) * scale;
  // Past 2^53 a double has no decimals left to round.
  return scaled >= 2 ** 53 ? value : (Math.sign(value) * Math.round(scaled)) / scale;
}

/** No negative zero: it would be written as -0 by some formats and as 0 by others. */
function plus(value: number): number {
  return value === 0 ? 0 : value;
}
