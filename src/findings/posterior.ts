import type { Anomaly } from '../anomalies/types.js';
import type { WellRecord } from '../records/types.js';
import { beliefMatchings } from './beliefMatchings.js';
import { clusters } from './clusters.js';
import { exactMatchings, MOST_STATES, type MatchingProblem, type MatchingSolution } from './matchings.js';
import { narrowestSdM, pairDensity, shiftedDensity, type PairDensity } from './pairDensity.js';
import { shiftPosterior, type ShiftNode } from './shiftQuadrature.js';

export interface PriorIntensities {
  /** Casings that no record tells of, per m². */
  readonly unrecordedPerM2: number;
  /** Sources that are no casings, per m². */
  readonly othersPerM2: number;
  /** Odds of casing against other that an anomaly's `pCasing` started from. */
  readonly casingOdds: number;
}

export interface PosteriorInput {
  readonly records: readonly WellRecord[];
  /** Chance, record by record, that its casing would have been detected, were it there. */
  readonly detect: readonly number[];
  readonly anomalies: readonly Anomaly[];
  readonly prior: PriorIntensities;
}

export interface Posterior {
  /** Chance that record i and anomaly j are one well: row by row. */
  readonly pairs: readonly Float64Array[];
  /** Chance that anomaly j is a casing, recorded or not. */
  readonly casing: Float64Array;
  /** Shared shifts that the matches tell of: mean and standard deviation per axis, metres. */
  readonly shifts: readonly GroupShift[];
}

export interface GroupShift {
  readonly id: string;
  readonly eastM: number;
  readonly northM: number;
  readonly sdM: number;
  readonly priorSdM: number;
}

/** A pair whose place parts weigh less than this against staying apart is counted on its own, not in a cluster. */
const WEAK = 1e-4;
/** Nobody is so sure of a casing, or of having detected it, that the other case is impossible. */
const LEAST_APART = 1e-6;
/** Groups that meet in a cluster are followed one after the other, this often. */
const ROUNDS = 3;

/**
 * Joint posterior of which record is which anomaly.
 *
 * An assignment pairs some records with some anomalies. It weighs, for a pair, p F L; for a record apart, 1 − p q (never
 * there, or there and missed); for an anomaly apart, ρ L + κ (a casing that no record tells of, or no casing). p is the
 * record's chance of steel, q its detection chance, F the density of both in one place (`pairDensity`), L the evidence of
 * the readings for casing against other, ρ and κ how densely unrecorded casings and other sources lie. Divided by all
 * staying apart, a pair weighs w = p F L / ((1 − p q)(ρ L + κ)).
 *
 * Records and anomalies that hang together are summed over exactly (`exactMatchings`), by belief propagation where they
 * are too many. A group's shared shift is integrated over a square of nodes; the density that a record brings includes
 * it, so it is taken out first. Groups that meet in one cluster are followed in turn, the others' weights averaged over
 * their shifts. Pairs through blunders alone are so weak that they are weighed against each record's staying apart only.
 *
 * Source: Bayes' theorem over data associations: Reid (1979), IEEE Trans. Autom. Control 24(6); Bar-Shalom & Fortmann
 * (1988), Tracking and Data Association.
 */
export function matchPosterior({ records, detect, anomalies, prior }: PosteriorInput): Posterior {
  const evidence = anomalies.map(({ pCasing }) => {
    const p = Math.min(1 - LEAST_APART, Math.max(LEAST_APART, pCasing));
    return p / (1 - p) / prior.casingOdds;
  });
  const apart = evidence.map((L) => prior.unrecordedPerM2 * L + prior.othersPerM2);
  const scale = (i: number, j: number): number => (records[i]!.pCasing * evidence[j]!) / (Math.max(LEAST_APART, 1 - records[i]!.pCasing * detect[i]!) * apart[j]!);

  const whole = records.map((record) => anomalies.map((anomaly) => pairDensity(record, anomaly, 0)));
  const columns = whole.map((row, i) => row.flatMap((pair, j) => (scale(i, j) * shiftedDensity(pair, 0, 0) > WEAK ? [j] : [])));
  const groups = sharedGroups(records, columns);
  const sharedOf = new Map(groups.flatMap(({ rows, sharedSdM }) => rows.map((row) => [row, sharedSdM] as const)));
  const strong = columns.map((row, i) => row.map((j) => (sharedOf.has(i) ? pairDensity(records[i]!, anomalies[j]!, sharedOf.get(i)!) : whole[i]![j]!)));

  // Weak pairs share a record's staying apart; an anomaly that a nearer record may own is less free for them.
  const free = anomalies.map((_, j) => 1 / (1 + columns.reduce((sum, row, i) => sum + (row.includes(j) ? scale(i, j) * totalDensity(whole[i]![j]!) : 0), 0)));
  const weak = records.map((_, i) => Float64Array.from(anomalies, (__, j) => (columns[i]!.includes(j) ? 0 : scale(i, j) * totalDensity(whole[i]![j]!) * free[j]!)));
  const weakSum = weak.map((row) => row.reduce((a, b) => a + b, 0));

  const at = (i: number, east: number, north: number): Float64Array =>
    Float64Array.from(columns[i]!, (j, k) => {
      const pair = strong[i]![k]!;
      return (scale(i, j) * (shiftedDensity(pair, east, north) + pair.spread)) / (1 + weakSum[i]!);
    });
  const weights = records.map((_, i) => Float64Array.from(columns[i]!, (j) => (scale(i, j) * totalDensity(whole[i]![j]!)) / (1 + weakSum[i]!)));
  const leastSdM = ({ rows }: SharedGroup): number => Math.min(...rows.flatMap((i) => strong[i]!.map(narrowestSdM))) / Math.sqrt(rows.length);
  const { chances, shifts } = settle({ columns, weights, at, groups: groups.map((group) => ({ ...group, leastSdM: leastSdM(group) })) });

  const pairs = records.map((_, i) => {
    const row = Float64Array.from(anomalies, () => 0);
    columns[i]!.forEach((j, k) => { row[j] = chances[i]![k]!; });
    const alone = 1 - row.reduce((a, b) => a + b, 0);
    weak[i]!.forEach((value, j) => { row[j]! += (alone * value) / (1 + weakSum[i]!); });
    return row;
  });
  const casing = Float64Array.from(anomalies, (_, j) => {
    const recorded = Math.min(1, pairs.reduce((sum, row) => sum + row[j]!, 0));
    return recorded + ((1 - recorded) * prior.unrecordedPerM2 * evidence[j]!) / apart[j]!;
  });
  return { pairs, casing, shifts };
}

function totalDensity(pair: PairDensity): number {
  return shiftedDensity(pair, 0, 0) + pair.spread;
}

interface SharedGroup {
  readonly id: string;
  readonly sharedSdM: number;
  /** Members that have an anomaly near. */
  readonly rows: readonly number[];
}

/** Groups of at least two records that have an anomaly near; a single one's shift is part of its own density. */
function sharedGroups(records: readonly WellRecord[], columns: readonly (readonly number[])[]): SharedGroup[] {
  const byId = new Map<string, number[]>();
  records.forEach(({ group }, i) => {
    if (!group || !(group.sharedSdM > 0) || columns[i]!.length === 0) return;
    byId.set(group.id, [...(byId.get(group.id) ?? []), i]);
  });
  // Where members state different parts in common, only the smallest is common to all.
  return [...byId].filter(([, rows]) => rows.length > 1).map(([id, rows]) => ({ id, rows, sharedSdM: Math.min(...rows.map((row) => records[row]!.group!.sharedSdM)) }));
}

interface Linked {
  readonly columns: readonly (readonly number[])[];
  /** Weights with every shift averaged over its prior. */
  readonly weights: readonly Float64Array[];
  readonly groups: ReadonlyArray<SharedGroup & { readonly leastSdM: number }>;
  /** Weights of a row at a shift of its group. */
  readonly at: (row: number, east: number, north: number) => Float64Array;
}

function settle({ columns, weights, groups, at }: Linked): { chances: Float64Array[]; shifts: GroupShift[] } {
  const chances = weights.map((row) => new Float64Array(row.length));
  const current = [...weights];
  const found = clusters(columns);
  const solver = new Solver(columns);
  const groupOf = new Map(groups.flatMap((group) => group.rows.map((row) => [row, group] as const)));
  for (const cluster of found) {
    if (!cluster.some((row) => groupOf.has(row))) solver.solve(cluster, (row) => weights[row]!, STATES.once).chances.forEach((row, k) => { chances[cluster[k]!]!.set(row); });
  }
  const shifts = new Map<string, GroupShift>();
  const meet = found.some((cluster) => new Set(cluster.map((row) => groupOf.get(row)?.id).filter(Boolean)).size > 1);
  for (let round = 0; round < (meet ? ROUNDS : 1); round++) {
    for (const group of groups) {
      const members = new Set(group.rows);
      const near = found.filter((cluster) => cluster.some((row) => members.has(row)));
      const weightsAt = (row: number, east: number, north: number): ArrayLike<number> => (members.has(row) ? at(row, east, north) : current[row]!);
      const nodes = shiftPosterior(
        (east, north) => near.reduce((sum, cluster) => sum + solver.solve(cluster, (row) => weightsAt(row, east, north), STATES.often).logZ, 0),
        { priorSdM: group.sharedSdM, leastSdM: group.leastSdM },
      );
      for (const row of group.rows) current[row] = average(nodes, ({ east, north }) => at(row, east, north));
      for (const cluster of near) {
        // Rows of other groups keep the chances of their own group's turn; rows without a group take the first turn's.
        const mine = cluster.map((row) => members.has(row) || (!groupOf.has(row) && groupOf.get(cluster.find((r) => groupOf.has(r))!) === group));
        cluster.forEach((row, k) => { if (mine[k]) chances[row]!.fill(0); });
        for (const { east, north, weight } of nodes) {
          const { chances: part } = solver.solve(cluster, (row) => weightsAt(row, east, north), STATES.often);
          cluster.forEach((row, k) => { if (mine[k]) part[k]!.forEach((value, c) => { chances[row]![c]! += weight * value; }); });
        }
      }
      shifts.set(group.id, summary(group, nodes));
    }
  }
  return { chances, shifts: [...shifts.values()] };
}

/** States that the exact sums may have open where they are wanted once, and where at hundreds of shifts. */
const STATES = Object.freeze({ once: MOST_STATES, often: 64 });

/** Exact where it can be, else by belief propagation. A group that proved too large is not tried again. */
class Solver {
  readonly #large = new Set<readonly number[]>();
  readonly #columns: readonly (readonly number[])[];

  constructor(columns: readonly (readonly number[])[]) {
    this.#columns = columns;
  }

  solve(cluster: readonly number[], of: (row: number) => ArrayLike<number>, mostStates: number): MatchingSolution {
    const problem: MatchingProblem = { columns: cluster.map((row) => this.#columns[row]!), weights: cluster.map(of) };
    const exact = this.#large.has(cluster) ? null : exactMatchings(problem, mostStates);
    if (!exact) this.#large.add(cluster);
    return exact ?? beliefMatchings(problem);
  }
}

function average(nodes: readonly ShiftNode[], of: (node: ShiftNode) => Float64Array): Float64Array {
  const sum = new Float64Array(of(nodes[0]!).length);
  for (const node of nodes) of(node).forEach((value, k) => { sum[k]! += node.weight * value; });
  return sum;
}

function summary({ id, sharedSdM }: SharedGroup, nodes: readonly ShiftNode[]): GroupShift {
  const mean = (of: (node: ShiftNode) => number): number => nodes.reduce((sum, node) => sum + node.weight * of(node), 0);
  const eastM = mean(({ east }) => east);
  const northM = mean(({ north }) => north);
  const sdM = Math.sqrt(mean(({ east, north }) => (east - eastM) ** 2 + (north - northM) ** 2) / 2);
  return { id, eastM, northM, sdM, priorSdM: sharedSdM };
}
