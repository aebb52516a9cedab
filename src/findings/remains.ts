/**
 * Chance that a casing is still there after an empty search, P(there | not detected) = p(1 − q)/(1 − pq).
 *
 * @param p Chance before the search that there is one, 0 to 1.
 * @param q Chance that it would have been detected, were it there, 0 to 1. A search that cannot miss leaves 0.
 *
 * Source: Bayes' theorem; Koopman (1980), Search and Screening; Stone (1975), Theory of Optimal Search.
 */
export function remainsAfterEmptySearch(p: number, q: number): number {
  const missed = p * (1 - q);
  return missed === 0 ? 0 : missed / (1 - p * q);
}
