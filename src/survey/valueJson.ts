/**
 * A stage's value as JSON that comes back exactly: numbers in their shortest exact form, and the numbers that JSON
 * does not know (NaN, infinities) as `{"$number": "NaN"}`.
 */
export function encodeValue(value: unknown): string {
  return `${JSON.stringify(value, (_, inner: unknown) => (typeof inner === 'number' && !Number.isFinite(inner) ? { $number: String(inner) } : inner), 1)}\n`;
}

export function decodeValue(text: string): unknown {
  return JSON.parse(text, (_, inner: unknown) => {
    const number = (inner as { $number?: string } | null)?.$number;
    return number === undefined ? inner : Number(number);
  });
}
