/** A number as a layer holds it: null where it is not known. */
export function known(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
