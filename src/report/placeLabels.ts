/** A label that wants to stand beside its marker. */
export interface Label {
  readonly text: string;
  /** Marker's centre in the drawing. */
  readonly x: number;
  readonly y: number;
  readonly className: string;
}

export interface PlacedLabel extends Label {
  /** Where the text begins, on its baseline. */
  readonly left: number;
  readonly baseline: number;
  /** It stands so far off that a line has to lead to it. */
  readonly far: boolean;
}

interface Box {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** Width of a character and height of a line at the labels' size, with a little to spare. */
const CHARACTER = 6.6;
const LINE = 13;
/** Half-width of a marker that labels keep off. */
const MARKER = 8;
/** Corners that overlap by no more than this, in square units, do not touch to the eye. */
const SLIGHT = 16;
const RINGS = [11, 20, 32, 46];
const DIRECTIONS = [[1, 0], [-1, 0], [0, -1], [0, 1], [0.8, -0.7], [-0.8, -0.7], [0.8, 0.7], [-0.8, 0.7]] as const;

/** Puts each label at the nearest free place around its marker, in the order given; where all are taken, at the least crowded. */
export function placeLabels(labels: readonly Label[], bounds: Box): PlacedLabel[] {
  const taken: Box[] = labels.map(({ x, y }) => ({ left: x - MARKER, right: x + MARKER, top: y - MARKER, bottom: y + MARKER }));
  return labels.map((label) => {
    const width = label.text.length * CHARACTER;
    let best: { box: Box; cost: number; ring: number } | null = null;
    for (const [ring, distance] of RINGS.entries()) {
      for (const [dx, dy] of DIRECTIONS) {
        const middle = label.x + dx * (distance + (dx === 0 ? 0 : width / 2));
        const box = around(middle, label.y + dy * distance, width);
        const cost = taken.reduce((sum, other) => sum + overlap(box, other), 0) + outside(box, bounds) * 4;
        if (best === null || (best.cost > SLIGHT && cost < best.cost)) best = { box, cost, ring };
      }
      if (best!.cost <= SLIGHT) break;
    }
    const { box, ring } = best!;
    taken.push(box);
    return { ...label, left: box.left, baseline: box.bottom - 3.2, far: ring > 1 };
  });
}

function around(x: number, y: number, width: number): Box {
  return { left: x - width / 2, right: x + width / 2, top: y - LINE / 2, bottom: y + LINE / 2 };
}

function overlap(a: Box, b: Box): number {
  return Math.max(0, Math.min(a.right, b.right) - Math.max(a.left, b.left)) * Math.max(0, Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top));
}

function outside(box: Box, bounds: Box): number {
  const inside = Math.max(0, Math.min(box.right, bounds.right) - Math.max(box.left, bounds.left)) * Math.max(0, Math.min(box.bottom, bounds.bottom) - Math.max(box.top, bounds.top));
  return (box.right - box.left) * (box.bottom - box.top) - inside;
}
