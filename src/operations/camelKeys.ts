/** Parameters under the names that code uses: `position_corr_s` becomes `positionCorrS`; nested objects too, lists kept. */
export function camelKeys<T extends object>(parameters: Readonly<Record<string, unknown>>): T {
  return camel(parameters) as T;
}

function camel(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(camel);
  if (value === null || typeof value !== 'object' || ArrayBuffer.isView(value)) return value;
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [camelKey(key), camel(inner)]));
}

/** One name: `cell_m` becomes `cellM`. */
export function camelKey(key: string): string {
  return key.replace(/_([a-z0-9])/g, (_, letter: string) => letter.toUpperCase());
}
