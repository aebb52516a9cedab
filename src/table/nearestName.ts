/** Share of a name's letters that may differ for it to count as a slip of the pen: beyond it the hint would mislead. */
const SLIP_SHARE = 0.4;

/**
 * The name nearest to the one wanted, for a hint: the fewest letters to insert, drop or change (Levenshtein 1966), case
 * and anything but letters and digits aside; null where none is near.
 */
export function nearestName(wanted: string, names: readonly string[]): string | null {
  const goal = plain(wanted);
  let best: string | null = null;
  let least = Infinity;
  for (const name of names) {
    const other = plain(name);
    const distance = editDistance(goal, other);
    if (distance <= SLIP_SHARE * Math.max(goal.length, other.length) && distance < least) [best, least] = [name, distance];
  }
  return best;
}

function plain(name: string): string {
  return name.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '');
}

function editDistance(a: string, b: string): number {
  let previous = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const current = [i];
    for (let j = 1; j <= b.length; j++) {
      current.push(Math.min(previous[j]! + 1, current[j - 1]! + 1, previous[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1)));
    }
    previous = current;
  }
  return previous[b.length]!;
}
