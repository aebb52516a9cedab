import type { MatchingProblem, MatchingSolution } from './matchings.js';

/** Rounds of messages at most, and the change of a message at which they have settled. */
const MOST_ROUNDS = 500;
const SETTLED = 1e-7;

/**
 * The same sums by belief propagation: rows and columns tell one another how free they are until nothing changes. It
 * settles for any weights; exact where rows and columns form a tree, else the chances are off by a few hundredths in
 * dense groups. For groups too large to be summed exactly.
 *
 * Source: Williams & Lau (2014), Approximate evaluation of marginal association probabilities with belief propagation,
 * IEEE Trans. Aerosp. Electron. Syst. 50(4); the sum by its Bethe form, Vontobel (2013), IEEE Trans. Inf. Theory 59(3).
 */
export function beliefMatchings({ columns, weights }: MatchingProblem): MatchingSolution {
  const count = columns.reduce((most, row) => row.reduce((m, column) => Math.max(m, column + 1), most), 0);
  const wanted = weights.map((row) => new Float64Array(row.length));
  const freedom = weights.map((row) => new Float64Array(row.length).fill(1));
  const asked = new Float64Array(count);
  for (let round = 0; round < MOST_ROUNDS; round++) {
    asked.fill(1);
    weights.forEach((row, i) => {
      let sum = 1;
      for (let k = 0; k < row.length; k++) sum += row[k]! * freedom[i]![k]!;
      for (let k = 0; k < row.length; k++) {
        wanted[i]![k] = row[k]! / (sum - row[k]! * freedom[i]![k]!);
        asked[columns[i]![k]!]! += wanted[i]![k]!;
      }
    });
    let change = 0;
    for (let i = 0; i < weights.length; i++) {
      for (let k = 0; k < weights[i]!.length; k++) {
        const value = 1 / (asked[columns[i]![k]!]! - wanted[i]![k]!);
        change = Math.max(change, Math.abs(value - freedom[i]![k]!));
        freedom[i]![k] = value;
      }
    }
    if (change < SETTLED) break;
  }
  let logZ = asked.reduce((sum, value) => sum + Math.log(value), 0);
  const chances = weights.map((row, i) => {
    const parts = Float64Array.from({ length: row.length }, (_, k) => row[k]! * freedom[i]![k]!);
    const sum = parts.reduce((a, b) => a + b, 1);
    logZ += Math.log(sum);
    parts.forEach((_, k) => { logZ -= Math.log1p(wanted[i]![k]! * freedom[i]![k]!); });
    return parts.map((part) => part / sum);
  });
  return { logZ, chances };
}
