import type { Anomaly } from '../anomalies/types.js';
import type { Finding } from './types.js';

/**
 * Ranks what can be dug: the casing of each located, ambiguous or unrecorded row, by its chance of being a casing, then by
 * deflection, then by name. Rows that name the same anomaly share a rank; rows with nothing to dig keep 0.
 *
 * @param casing Chance that each anomaly of the list is a casing.
 */
export function digOrder(rows: readonly Finding[], list: readonly Anomaly[], casing: ArrayLike<number>): Finding[] {
  const named = new Set(rows.map(({ anomalyId }) => anomalyId));
  const ranked = list
    .map((anomaly, j) => ({ id: anomaly.anomalyId, chance: casing[j]!, snr: anomaly.snr }))
    .filter(({ id }) => named.has(id))
    .toSorted((a, b) => b.chance - a.chance || b.snr - a.snr || (a.id < b.id ? -1 : 1));
  const rank = new Map(ranked.map(({ id }, k) => [id, k + 1]));
  return rows.map((row) => ({ ...row, digOrder: rank.get(row.anomalyId) ?? 0 }));
}
