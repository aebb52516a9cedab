import { describe, expect, it } from 'vitest';
import { Moves } from '../../src/grid/moves.js';

type Falling = readonly [i: number, j: number, rate: number, first?: number];
const SIZE = { width: 200, height: 140, watch: null };

describe('Moves', () => {
  /** A surface that nears zero by `rate` in each cycle, from `first` (or 1) at the nodes given. */
  const after = (cycles: number, nodes: readonly Falling[]): Float64Array => {
    const z = new Float64Array(SIZE.width * SIZE.height);
    for (const [i, j, rate, first = 1] of nodes) z[j * SIZE.width + i] = first * rate ** cycles;
    return z;
  };
  const followed = (nodes: readonly Falling[], cycles: number, size: ConstructorParameters<typeof Moves>[1] = SIZE): Moves => {
    const moves = new Moves(after(0, nodes), size);
    for (let cycle = 1; cycle <= cycles; cycle++) moves.note(after(cycle, nodes));
    return moves;
  };

  it.each([0.3, 0.5, 0.9])('sees what is left of an error that falls to %f of itself from cycle to cycle', (rate) => {
    const moves = followed([[50, 60, rate]], 4);
    expect(moves.rate).toBeCloseTo(rate, 9);
    expect(moves.remaining).toBeCloseTo(rate ** 4, 9);
  });

  it('does not let a fast spot speak for a slow one', () => {
    expect(followed([[50, 60, 0.15], [150, 100, 0.8]], 5).remaining).toBeCloseTo(0.8 ** 5, 9);
  });

  it('counts only nodes that are watched, but lays windows around all', () => {
    const watch = new Uint8Array(SIZE.width * SIZE.height);
    const moves = followed([[50, 60, 0.5]], 3, { ...SIZE, watch });
    expect(moves.remaining).toBe(0);
    // What nobody watches pulls on what lies beside.
    expect(moves.unsettled(0.1)).toHaveLength(1);
  });

  it('lays a window around a slow spot that is watched, though a fast one beside it is not', () => {
    const watch = new Uint8Array(SIZE.width * SIZE.height);
    watch[61 * SIZE.width + 51] = 1;
    const moves = followed([[50, 60, 0.05], [51, 61, 0.9, 0.01]], 3, { ...SIZE, watch });
    expect(moves.remaining).toBeCloseTo(0.01 * 0.9 ** 3, 9);
    expect(moves.unsettled(0.001)).toHaveLength(1);
  });

  it('lays windows with a margin around what still moves, joins those that overlap, and keeps them inside', () => {
    const moves = followed([[100, 70, 0.5], [3, 3, 0.5], [160, 70, 0.25]], 3);
    expect(moves.unsettled(0.2)).toEqual([]);
    expect(moves.unsettled(0.1)).toEqual([
      { left: 0, top: 0, width: 64, height: 64 },
      { left: 64, top: 32, width: 96, height: 96 },
    ]);
    expect(moves.unsettled(0.005)).toEqual([
      { left: 0, top: 0, width: 64, height: 64 },
      { left: 64, top: 32, width: 136, height: 96 },
    ]);
  });
});
