/** A plain decimal number, as coordinates are written. */
export const numberText = /^[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?$/;

/** Digits after the point of a plain number: `40.50` has 2. An exponent counts: `4.05e1` has 1. */
export function decimalsOf(text: string): number {
  const [mantissa, exponent] = text.toLowerCase().split('e') as [string, string | undefined];
  const point = mantissa.indexOf('.');
  const decimals = point < 0 ? 0 : mantissa.length - point - 1;
  return Math.max(0, decimals - Number(exponent ?? 0));
}
