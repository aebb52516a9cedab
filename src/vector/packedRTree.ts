import type { Box } from './layerGeometry.js';
import { emptyBox, growBox } from './layerGeometry.js';

/** Children of a node; the FlatGeobuf default. */
export const NODE_SIZE = 16;
/** Four 64-bit bounds and a 64-bit offset. */
export const NODE_BYTES = 40;

/**
 * The static packed R-tree of FlatGeobuf over leaves in the order of the features: levels from the root down, each node
 * west, south, east, north and an offset, which is the place of the first child (as a node number) and in a leaf the
 * place of the feature (in bytes from the first). An inverted box meets no query, and does not widen its parents.
 * Source: FlatGeobuf specification 3.0 (index), after Vladimir Agafonkin's flatbush.
 */
export function packRTree(boxes: readonly Box[], offsets: readonly number[]): Uint8Array {
  const levels = levelStarts(boxes.length);
  const total = levels[levels.length - 1]!.end;
  const bytes = new Uint8Array(total * NODE_BYTES);
  const view = new DataView(bytes.buffer);
  let children: Box[] = boxes.map(box => box);
  let childOffsets: readonly number[] = offsets;
  for (let level = levels.length - 1; level >= 0; level--) {
    const { start, end } = levels[level]!;
    for (let i = 0; i < children.length; i++) writeNode(view, start + i, { box: children[i]!, offset: childOffsets[i]! });
    if (start + children.length !== end) throw new Error(`level ${level} of the index holds ${children.length} nodes, not ${end - start}`);
    const parents: Box[] = [];
    const parentOffsets: number[] = [];
    for (let i = 0; i < children.length; i += NODE_SIZE) {
      const box = emptyBox();
      for (const child of children.slice(i, i + NODE_SIZE)) {
        if (child[0] > child[2]) continue;
        growBox(box, child[0], child[1]);
        growBox(box, child[2], child[3]);
      }
      parents.push(box);
      parentOffsets.push(start + i);
    }
    [children, childOffsets] = [parents, parentOffsets];
  }
  return bytes;
}

/** Node numbers of each level, root first; one leaf still has a root over it, as the format's readers expect. */
export function levelStarts(leaves: number, nodeSize = NODE_SIZE): { start: number; end: number }[] {
  if (leaves < 1) throw new Error('an index over nothing');
  const counts = [leaves];
  do counts.unshift(Math.ceil(counts[0]! / nodeSize));
  while (counts[0]! > 1);
  let start = 0;
  return counts.map(count => ({ start, end: (start += count) }));
}

function writeNode(view: DataView, node: number, { box, offset }: { box: Box; offset: number }): void {
  for (let i = 0; i < 4; i++) view.setFloat64(node * NODE_BYTES + i * 8, box[i]!, true);
  view.setBigUint64(node * NODE_BYTES + 32, BigInt(offset), true);
}
