import type { Piece } from './parallelLines.js';
import type { Step } from './tour.js';

/** Lines one after the other, every second one backwards; the pieces of a line in the order they lie. `pieces` go by v, then u. */
export function plainOrder(pieces: readonly Piece[]): Step[] {
  const steps: Step[] = [];
  for (let from = 0, line = 0; from < pieces.length; line++) {
    let to = from + 1;
    while (to < pieces.length && pieces[to]!.v === pieces[from]!.v) to++;
    const backwards = line % 2 === 1;
    const indices = Array.from({ length: to - from }, (_, i) => from + i);
    for (const index of backwards ? indices.toReversed() : indices) steps.push({ index, reversed: backwards });
    from = to;
  }
  return steps;
}

/**
 * The ground's cells one after the other (boustrophedon decomposition, Choset & Pignon 1998): a cell is a run of pieces on
 * neighbouring lines each of which lies beside one piece only, before and after. Within a cell lines are walked to and fro;
 * the cell whose corner is nearest comes next.
 */
export function cellOrder(pieces: readonly Piece[]): Step[] {
  const open = cells(pieces);
  const steps: Step[] = [];
  let [u, v] = pieces.length > 0 ? [pieces[0]!.u0, pieces[0]!.v] : [0, 0];
  while (open.length > 0) {
    let best = { cell: 0, upwards: true, reversed: false, distance: Infinity };
    open.forEach((cell, i) => {
      for (const upwards of [true, false]) {
        for (const reversed of [false, true]) {
          const piece = pieces[upwards ? cell[0]! : cell.at(-1)!]!;
          const distance = Math.hypot((reversed ? piece.u1 : piece.u0) - u, piece.v - v);
          if (distance < best.distance) best = { cell: i, upwards, reversed, distance };
        }
      }
    });
    const [cell] = open.splice(best.cell, 1);
    (best.upwards ? cell! : cell!.toReversed()).forEach((index, i) => steps.push({ index, reversed: best.reversed !== (i % 2 === 1) }));
    const last = pieces[steps.at(-1)!.index]!;
    [u, v] = [steps.at(-1)!.reversed ? last.u0 : last.u1, last.v];
  }
  return steps;
}

function cells(pieces: readonly Piece[]): number[][] {
  const lines: number[][] = [];
  pieces.forEach(({ v }, i) => {
    const last = lines.at(-1);
    if (last && pieces[last[0]!]!.v === v) last.push(i);
    else lines.push([i]);
  });
  const cellOf = new Map<number, number[]>();
  const all: number[][] = [];
  lines.forEach((line, k) => {
    const before = lines[k - 1] ?? [];
    for (const index of line) {
      const beside = before.filter((other) => overlap(pieces[other]!, pieces[index]!));
      const only = beside.length === 1 ? beside[0]! : null;
      const alone = only !== null && line.filter((other) => overlap(pieces[only]!, pieces[other]!)).length === 1;
      const cell = only !== null && alone ? cellOf.get(only)! : [];
      if (cell.length === 0) all.push(cell);
      cell.push(index);
      cellOf.set(index, cell);
    }
  });
  return all;
}

function overlap(a: Piece, b: Piece): boolean {
  return a.u0 < b.u1 && b.u0 < a.u1;
}
