import type { ReadingTree } from './readingTree.js';

/** Which nodes of a tree a place is heard through. */
export interface Gathering {
  /** Node numbers; the first `count` of them are meant. */
  readonly nodes: Int32Array;
  count: number;
}

export interface GatherOptions {
  /** Readings farther away than this, horizontally, are left out. */
  readonly windowM: number;
  /** Depth of the source below ground that distances are counted with. */
  readonly depthM: number;
  /** A node speaks for its square where the square's side is at most this share of the distance to the source. */
  readonly poolShare: number;
}

/** Where more nodes are found than there is room for, squares may be larger by this factor, and again. */
const COARSER = 1.3;
/** Past this share a square is no longer small against its distance; then the farthest nodes are left out instead. */
const COARSEST_SHARE = 0.9;

/** Fills `into` with the nodes within the window of (x, y), at most as many as it has room for. */
export function gather(tree: ReadingTree, [x, y]: readonly [number, number], options: GatherOptions & { into: Gathering }): void {
  const { into } = options;
  const room = into.nodes.length;
  let share = options.poolShare;
  let window = options.windowM;
  while (!collect(tree, [x, y], { ...options, poolShare: share, windowM: window })) {
    if (share * COARSER < COARSEST_SHARE) share *= COARSER;
    else window /= COARSER;
    if (room === 0) throw new Error('gather: there is no room for a node');
  }
}

/** False where the nodes did not fit. */
function collect(tree: ReadingTree, [x, y]: readonly [number, number], { windowM, depthM, poolShare, into }: GatherOptions & { into: Gathering }): boolean {
  const { rootM, west, south, columns, rows } = tree;
  into.count = 0;
  const column0 = Math.max(0, Math.floor((x - windowM - west) / rootM));
  const column1 = Math.min(columns - 1, Math.floor((x + windowM - west) / rootM));
  const row0 = Math.max(0, Math.floor((y - windowM - south) / rootM));
  const row1 = Math.min(rows - 1, Math.floor((y + windowM - south) / rootM));
  const pending: number[] = [];
  for (let row = row0; row <= row1; row++) {
    for (let column = column0; column <= column1; column++) {
      const root = tree.roots[row * columns + column]!;
      if (root >= 0) pending.push(root);
    }
  }
  while (pending.length > 0) {
    const node = pending.pop()!;
    const level = tree.level[node]!;
    const side = tree.leafM * 2 ** level;
    const dx = tree.x[node]! - x;
    const dy = tree.y[node]! - y;
    const flat2 = dx * dx + dy * dy;
    const reach = windowM + (level > 0 ? side * Math.SQRT2 : 0);
    if (flat2 > reach * reach) continue;
    const drop = tree.heightM[node]! + depthM;
    if (level > 0 && side * side > poolShare * poolShare * (flat2 + drop * drop)) {
      for (let k = 0; k < tree.children[node]!; k++) pending.push(tree.child[node]! + k);
    } else if (flat2 <= windowM * windowM) {
      if (into.count === into.nodes.length) return false;
      into.nodes[into.count++] = node;
    }
  }
  return true;
}
