/** A shift of a group of records with its share of the posterior. */
export interface ShiftNode {
  readonly east: number;
  readonly north: number;
  readonly weight: number;
}

export interface ShiftScale {
  /** Standard deviation of the prior on each axis, metres. */
  readonly priorSdM: number;
  /** Least standard deviation that the posterior can have. */
  readonly leastSdM: number;
}

/** Nodes along each axis of a round: at first, and at most where the posterior stays wide and may have narrow peaks. */
const NODES = 29;
const MOST_NODES = 127;
/** Nodes along an axis grow by this factor while tempering is needed and the square does not shrink. */
const MORE_NODES = 1.6;
/** The first round reaches this many prior standard deviations. */
const REACH_SIGMAS = 4.5;
/** A peak cannot hide between two nodes where the step is at most this many of its standard deviations. */
const STEP_SIGMAS = 1.5;
/** Nodes whose log weight lies this far below the best weigh nothing. */
const NEGLIGIBLE = 14;
/** Each round narrows the square to where the weight is; more rounds than this find nothing new. */
const MOST_ROUNDS = 8;
/** A square that shrinks by less than this is fine enough. */
const SHRINK = 0.7;

/**
 * Nodes and weights (summing to 1) of the posterior of a shift with prior N(0, sd²) on each axis, by an even square of
 * nodes that closes in on where the posterior is. While the step is wide against the narrowest peak, the evidence is
 * tempered (its logarithm scaled down, which widens every peak), so that none is lost between the nodes. An even sum is
 * exact to many digits once the step is below the posterior's standard deviation.
 *
 * @param logLikelihood Log of the evidence for a shift (east, north), metres.
 */
export function shiftPosterior(logLikelihood: (east: number, north: number) => number, { priorSdM, leastSdM }: ShiftScale): ShiftNode[] {
  let [west, south, side] = [-REACH_SIGMAS * priorSdM, -REACH_SIGMAS * priorSdM, 2 * REACH_SIGMAS * priorSdM];
  let nodes: ShiftNode[] = [];
  let count = NODES;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const step = side / (count - 1);
    const temper = count === MOST_NODES ? 1 : Math.min(1, (STEP_SIGMAS * leastSdM) / step) ** 2;
    const logs: Array<{ east: number; north: number; log: number }> = [];
    let best = -Infinity;
    for (let i = 0; i < count; i++) {
      for (let j = 0; j < count; j++) {
        const [east, north] = [west + i * step, south + j * step];
        const log = temper * logLikelihood(east, north) - (east * east + north * north) / (2 * priorSdM * priorSdM);
        logs.push({ east, north, log });
        best = Math.max(best, log);
      }
    }
    const heavy = logs.filter(({ log }) => log > best - NEGLIGIBLE);
    const total = heavy.reduce((sum, { log }) => sum + Math.exp(log - best), 0);
    nodes = heavy.map(({ east, north, log }) => ({ east, north, weight: Math.exp(log - best) / total }));
    const bounds = heavy.reduce((b, { east, north }) => [Math.min(b[0], east), Math.max(b[1], east), Math.min(b[2], north), Math.max(b[3], north)] as const, [Infinity, -Infinity, Infinity, -Infinity] as const);
    const nextSide = Math.max(bounds[1] - bounds[0], bounds[3] - bounds[2]) + 2 * step;
    const shrinks = nextSide <= SHRINK * side;
    if (temper === 1 && !shrinks) break;
    count = shrinks ? NODES : Math.min(MOST_NODES, Math.ceil(count * MORE_NODES));
    west = (bounds[0] + bounds[1] - nextSide) / 2;
    south = (bounds[2] + bounds[3] - nextSide) / 2;
    side = Math.min(side, nextSide);
  }
  return nodes;
}
