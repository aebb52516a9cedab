import type { RawPlace } from './rawRecord.js';

/** A plain decimal number, as coordinates are written. */
export const numberText = /^[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?$/;

/**
 * For each text of a column whether it may have lost trailing zeros: it has fewer decimals than others, and none of the
 * column's decimals ends in a zero, as where a spreadsheet has written them. Texts that are no plain number never have.
 */
export function mayLackZeros(texts: readonly string[]): boolean[] {
  const plain = texts.map((text) => (numberText.test(text) ? decimalsOf(text) : null));
  const most = plain.reduce<number>((largest, decimals) => Math.max(largest, decimals ?? 0), 0);
  const keepsZeros = texts.some((text, i) => (plain[i] ?? 0) > 0 && text.endsWith('0'));
  return plain.map((decimals) => !keepsZeros && decimals !== null && decimals < most);
}

/** Digits after the point of a plain number: `40.50` has 2. An exponent counts: `4.05e1` has 1. */
export function decimalsOf(text: string): number {
  const [mantissa, exponent] = text.toLowerCase().split('e') as [string, string | undefined];
  const point = mantissa.indexOf('.');
  const decimals = point < 0 ? 0 : mantissa.length - point - 1;
  return Math.max(0, decimals - Number(exponent ?? 0));
}

/** How the last digit of a file's coordinates came about. */
export const DIGIT_KINDS = ['rounded', 'truncated'] as const;
export type DigitKind = (typeof DIGIT_KINDS)[number];

/** The middle of the places that digits which were cut off, not rounded, may stand for: half a digit farther from zero. */
export function middleOfTruncated(place: RawPlace): RawPlace {
  if (place.kind === 'angles') {
    return { ...place, lonDeg: farther(place.lonDeg, place.lonResolutionDeg), latDeg: farther(place.latDeg, place.latResolutionDeg) };
  }
  return { ...place, eastM: farther(place.eastM, place.eastResolutionM), northM: farther(place.northM, place.northResolutionM) };
}

/** A number without its sign is truncated towards zero; the negative zero of `-0.4` cut to whole degrees keeps its side. */
function farther(value: number, resolution: number): number {
  return value + (value < 0 || Object.is(value, -0) ? -resolution : resolution) / 2;
}
