import { agreement } from './agreement.js';
import type { Solution } from './solution.js';
import type { Disagreement } from './types.js';

/** What a record's place rests on, and what of its statements lies elsewhere with which share of the chance. */
export interface Weighed {
  readonly best: Solution;
  readonly others: ReadonlyArray<{ readonly solution: Solution; readonly share: number }>;
  readonly disagreements: readonly Omit<Disagreement, 'recordId' | 'source' | 'row'>[];
}

/** A share of the chance below this is left out: it lies far within the blunders. */
const LEAST_SHARE = 0.001;

/**
 * Chooses among the statements of a record. A unit is a statement that stands by itself, with the places that it leads to
 * (calls and the part that they lie in are one unit: both hang on the same section), the smallest error first. The unit
 * that most kinds of units agree with is taken, of equals the one with the smallest error. A kind counts once: coordinates
 * beside coordinates are mostly copies of each other.
 *
 * A place that disagrees with the one taken is a finding, and keeps a share of the chance: where each statement is a
 * blunder with chance b, n kinds that agree are right against m that agree elsewhere with odds (1 − b)ⁿ⁻ᵐ : bⁿ⁻ᵐ (Bayes),
 * so of two that contradict each other each may be right, and of three the odd one is worth about b.
 */
export function weighStatements(units: readonly (readonly Solution[])[], { blunderShare, disagreeBelow }: { readonly blunderShare: number; readonly disagreeBelow: number }): Weighed {
  if (units.length === 1 && units[0]!.length === 1) return { best: units[0]![0]!, others: [], disagreements: [] };
  const agrees = (a: Solution, b: Solution): boolean => a === b || agreement(a, b).p >= disagreeBelow;
  const heads = units.map((unit) => unit[0]!);
  const votes = heads.map((head) => new Set(heads.filter((other) => agrees(head, other)).map(familyOf)).size);
  const chosen = heads.reduce((at, head, i) => (votes[i]! > votes[at]! || (votes[i] === votes[at] && head.sdM < heads[at]!.sdM) ? i : at), 0);
  const best = heads[chosen]!;
  const apart = [
    ...heads.flatMap((head, i) => (agrees(best, head) ? [] : [{ solution: head, votes: votes[i]! }])),
    // Within its own unit: calls that lead out of the part named beside them.
    ...units[chosen]!.slice(1).flatMap((solution) => (agrees(best, solution) ? [] : [{ solution, votes: votes[chosen]! }])),
  ];
  const odds = apart.map((each) => (blunderShare > 0 ? blunderShare / (1 - blunderShare) : 0) ** (votes[chosen]! - each.votes));
  const total = 1 + odds.reduce((sum, each) => sum + each, 0);
  const others = apart.map(({ solution }, i) => ({ solution, share: odds[i]! / total }));
  return {
    best, others: others.filter(({ share }) => share >= LEAST_SHARE),
    disagreements: others.map(({ solution, share }) => ({ kept: best.said, other: solution.said, ...agreement(best, solution), otherShare: (1 - blunderShare) * share })),
  };
}

/** Coordinates, distances on a map, and what is measured in a section: each is found in a way of its own. */
function familyOf({ kind }: Solution): string {
  return kind === 'coordinates' || kind === 'map corner' ? kind : 'section';
}
