import { heardTimeS, isHeard, type Heard } from './heard.js';

/**
 * Readings pooled in squares that halve from level to level (a quadtree, nodes of one level in a row). Far away from a
 * place, one node speaks for all readings in its square; near it, single leaves do.
 */
export interface ReadingTree {
  readonly leafM: number;
  /** Levels above the leaves; a root's side is leafM · 2^levels. */
  readonly levels: number;
  /** Mean place, height and time of each node's readings, and how many they are. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly heightM: Float64Array;
  readonly timeS: Float64Array;
  readonly weight: Float64Array;
  /** First child and number of children; none for a leaf. */
  readonly child: Int32Array;
  readonly children: Uint8Array;
  readonly level: Uint8Array;
  /** Root node by row and column, −1 where nothing was heard. Row 0 lies in the south. */
  readonly roots: Int32Array;
  readonly rootM: number;
  readonly west: number;
  readonly south: number;
  readonly columns: number;
  readonly rows: number;
}

/** `leafM`: side of the smallest square; `rootM`: least side of the largest. */
export function readingTree(heard: Heard, { leafM, rootM: leastRootM }: { leafM: number; rootM: number }): ReadingTree {
  const levels = Math.max(0, Math.ceil(Math.log2(leastRootM / leafM)));
  const perRoot = 2 ** levels;
  const rootM = leafM * perRoot;
  const used: number[] = [];
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (let i = 0; i < heard.x.length; i++) {
    if (!isHeard(heard, i)) continue;
    used.push(i);
    west = Math.min(west, heard.x[i]!);
    east = Math.max(east, heard.x[i]!);
    south = Math.min(south, heard.y[i]!);
    north = Math.max(north, heard.y[i]!);
  }
  const empty = used.length === 0;
  const columns = empty ? 0 : Math.floor((east - west) / rootM) + 1;
  const rows = empty ? 0 : Math.floor((north - south) / rootM) + 1;

  // Key: root, then the path of quarters down to the leaf, so that every square's readings stand in a row.
  const keys = new Float64Array(heard.x.length);
  for (const i of used) {
    const column = Math.floor((heard.x[i]! - west) / leafM);
    const row = Math.floor((heard.y[i]! - south) / leafM);
    const root = Math.floor(row / perRoot) * columns + Math.floor(column / perRoot);
    keys[i] = root * perRoot * perRoot + interleave(column % perRoot, row % perRoot, levels);
  }
  const order = Uint32Array.from(used).toSorted((a, b) => keys[a]! - keys[b]! || a - b);
  return pool(heard, { order, keys }, { leafM, levels, rootM, west, south, columns, rows });
}

type Frame = Pick<ReadingTree, 'leafM' | 'levels' | 'rootM' | 'west' | 'south' | 'columns' | 'rows'>;

function pool(heard: Heard, { order, keys }: { order: Uint32Array; keys: Float64Array }, frame: Frame): ReadingTree {
  const [x, y, heightM, timeS, weight, child, children, level, keyOf]: number[][] = [[], [], [], [], [], [], [], [], []];
  const open = (key: number, at: number, depth: number): void => {
    for (const column of [x, y, heightM, timeS, weight, children]) column!.push(0);
    child!.push(at);
    level!.push(depth);
    keyOf!.push(key);
  };
  const add = (px: number, py: number, h: number, t: number, w: number): void => {
    const last = x!.length - 1;
    const sum = weight![last]! + w;
    const share = w / sum;
    // Running means: sums of frame coordinates and of UTC seconds would lose digits.
    x![last]! += share * (px - x![last]!);
    y![last]! += share * (py - y![last]!);
    heightM![last]! += share * (h - heightM![last]!);
    timeS![last]! += share * (t - timeS![last]!);
    weight![last] = sum;
    children![last]!++;
  };
  let key = NaN;
  for (const i of order) {
    if (keys[i] !== key) {
      key = keys[i]!;
      open(key, -1, 0);
    }
    add(heard.x[i]!, heard.y[i]!, heard.heightM[i]!, heardTimeS(heard, i), 1);
  }
  let [from, to] = [0, x!.length];
  children!.fill(0);
  for (let depth = 1; depth <= frame.levels; depth++) {
    key = NaN;
    for (let node = from; node < to; node++) {
      const parent = Math.floor(keyOf![node]! / 4);
      if (parent !== key) {
        key = parent;
        open(key, node, depth);
      }
      add(x![node]!, y![node]!, heightM![node]!, timeS![node]!, weight![node]!);
    }
    [from, to] = [to, x!.length];
  }
  const roots = new Int32Array(frame.columns * frame.rows).fill(-1);
  for (let node = from; node < to; node++) roots[keyOf![node]!] = node;
  return {
    ...frame, roots,
    x: Float64Array.from(x!), y: Float64Array.from(y!), heightM: Float64Array.from(heightM!), timeS: Float64Array.from(timeS!),
    weight: Float64Array.from(weight!), child: Int32Array.from(child!), children: Uint8Array.from(children!), level: Uint8Array.from(level!),
  };
}

/** Bits of column and row in turn, most significant first. */
function interleave(column: number, row: number, bits: number): number {
  let key = 0;
  for (let bit = bits - 1; bit >= 0; bit--) key = key * 4 + ((row >> bit) & 1) * 2 + ((column >> bit) & 1);
  return key;
}
