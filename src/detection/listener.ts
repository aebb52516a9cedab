import { NT_PER_POLE } from '../field/pole.js';
import { filterWeights, rowLength, whitenSignals } from './deflection.js';
import { gather, type GatherOptions, type Gathering } from './gather.js';
import { LEAST_WHITE_NT } from './noise.js';
import type { ReadingTree } from './readingTree.js';
import { DEPTH_NODES, type HeardPole } from './targetAverage.js';
import type { NoiseModel } from './types.js';

/** Most pools of readings that one place is heard through. */
const MOST_POOLS = 64;
/** Background columns: constant and plane. With no more pools than that, nothing is left to hear with. */
const BACKGROUND = 3;

export interface ListenerOptions {
  readonly noise: NoiseModel;
  /** Direction of the main field in the frame. */
  readonly unit: readonly [number, number, number];
  readonly pooling: GatherOptions;
}

/** Hears poles at a place: work space that is used again from place to place. */
export class Listener {
  readonly #tree: ReadingTree;
  readonly #options: ListenerOptions;
  readonly #stride = MOST_POOLS;
  readonly #into: Gathering = { nodes: new Int32Array(MOST_POOLS), count: 0 };
  readonly #work = new Float64Array((MOST_POOLS + BACKGROUND + DEPTH_NODES) * MOST_POOLS);
  readonly #inTime = new Float64Array(MOST_POOLS * MOST_POOLS);
  readonly #x = new Float64Array(MOST_POOLS);
  readonly #y = new Float64Array(MOST_POOLS);
  readonly #slopeX = new Float64Array(DEPTH_NODES * MOST_POOLS);
  readonly #slopeY = new Float64Array(DEPTH_NODES * MOST_POOLS);

  constructor(tree: ReadingTree, options: ListenerOptions) {
    this.#tree = tree;
    this.#options = options;
  }

  /**
   * How poles of 1 A·m at a place (frame metres) and up to three depths below ground would be heard; null where too few
   * readings are near.
   */
  hear(x: number, y: number, depths: readonly number[]): HeardPole | null {
    gather(this.#tree, [x, y], { ...this.#options.pooling, into: this.#into });
    const n = this.#into.count;
    if (n <= BACKGROUND) return null;
    this.#noise(n, x, y);
    this.#signals(n, depths);
    const shape = { n, background: BACKGROUND, signals: depths.length, stride: this.#stride };
    whitenSignals(this.#work, shape);
    const perAM = depths.map((_, k) => rowLength(this.#work, n + BACKGROUND + k, shape));
    return { perAM, wander: depths.map((_, k) => this.#wander(n, k, perAM[k]!)) };
  }

  /** Covariance without the source: white, less for more readings in a pool, and geology. Background columns below it. */
  #noise(n: number, x: number, y: number): void {
    const { noise, pooling } = this.#options;
    const a = this.#work;
    const stride = this.#stride;
    const whiteVar = Math.max(noise.whiteSdNT, LEAST_WHITE_NT) ** 2;
    const correlatedVar = noise.correlatedSdNT ** 2;
    const perM = noise.correlationM > 0 ? -1 / noise.correlationM : -Infinity;
    for (let i = 0; i < n; i++) {
      const node = this.#into.nodes[i]!;
      const xi = this.#tree.x[node]! - x;
      const yi = this.#tree.y[node]! - y;
      this.#x[i] = xi;
      this.#y[i] = yi;
      for (let j = 0; j < i; j++) {
        const dx = xi - this.#x[j]!;
        const dy = yi - this.#y[j]!;
        a[i * stride + j] = correlatedVar * Math.exp(perM * Math.sqrt(dx * dx + dy * dy));
      }
      a[i * stride + i] = correlatedVar + whiteVar / this.#tree.weight[node]!;
      a[n * stride + i] = 1;
      a[(n + 1) * stride + i] = xi / pooling.windowM;
      a[(n + 2) * stride + i] = yi / pooling.windowM;
    }
  }

  /** Projection of each depth's pole on the main field, nT, and its slopes, nT/m, for the position error. */
  #signals(n: number, depths: readonly number[]): void {
    const [ux, uy, uz] = this.#options.unit;
    depths.forEach((depthM, k) => {
      const row = (n + BACKGROUND + k) * this.#stride;
      for (let i = 0; i < n; i++) {
        const rx = this.#x[i]!;
        const ry = this.#y[i]!;
        const rz = this.#tree.heightM[this.#into.nodes[i]!]! + depthM;
        const r2 = rx * rx + ry * ry + rz * rz;
        const scale = NT_PER_POLE / (r2 * Math.sqrt(r2));
        const along = ux * rx + uy * ry + uz * rz;
        this.#work[row + i] = scale * along;
        this.#slopeX[k * MOST_POOLS + i] = scale * (ux - (3 * along * rx) / r2);
        this.#slopeY[k * MOST_POOLS + i] = scale * (uy - (3 * along * ry) / r2);
      }
    });
  }

  /** What position error does to the filter's output for depth k, one standard deviation as a share of the output. */
  #wander(n: number, k: number, length: number): number {
    const { positionSdM, positionCorrelationS } = this.#options.noise;
    if (!(positionSdM > 0) || length === 0) return 0;
    const a = this.#work;
    const row = n + BACKGROUND + k;
    filterWeights(a, row, { n, stride: this.#stride });
    const perS = positionCorrelationS > 0 ? -1 / positionCorrelationS : -Infinity;
    if (k === 0) {
      for (let i = 0; i < n; i++) {
        const time = this.#tree.timeS[this.#into.nodes[i]!]!;
        for (let j = 0; j < i; j++) this.#inTime[i * this.#stride + j] = Math.exp(perS * Math.abs(time - this.#tree.timeS[this.#into.nodes[j]!]!));
      }
    }
    const at = k * MOST_POOLS;
    let sum = 0;
    for (let i = 0; i < n; i++) {
      const w = a[row * this.#stride + i]!;
      const wx = w * this.#slopeX[at + i]!;
      const wy = w * this.#slopeY[at + i]!;
      // `wx`, `wy` of earlier readings took the slopes' place.
      let cross = 0;
      for (let j = 0; j < i; j++) cross += this.#inTime[i * this.#stride + j]! * (wx * this.#slopeX[at + j]! + wy * this.#slopeY[at + j]!);
      sum += wx * wx + wy * wy + 2 * cross;
      this.#slopeX[at + i] = wx;
      this.#slopeY[at + i] = wy;
    }
    // The weights are L⁻ᵀ of the whitened signal, whose length is the output's noise and whose square is the output.
    return (positionSdM * Math.sqrt(sum)) / (length * length);
  }
}
