/** Values on a torus: row after row with `stride` numbers a row; the last column neighbours the first, the last row the first. */
export interface Torus {
  readonly width: number;
  readonly height: number;
  readonly stride: number;
  readonly values: Float64Array;
  /** 1 where a value is given; `width` a row. */
  readonly known: Uint8Array;
}

/** Sweeps on each level: the coarser level has settled all longer waves already, these settle what it cannot carry. */
const SWEEPS = 4;
/**
 * Sweeps of a plate at the end, over the cells next to given ones: they lead the slope at the rim on over a few cells. A
 * kink there would ring through a derivative (a source on the edge: 38 % of the peak at the edge without them, 7 % with).
 */
const PLATE_SWEEPS = 12;
/** As far, in cells along rows and columns, as so many sweeps change anything that matters. */
const PLATE_REACH = 8;

/**
 * Fills the cells that are not known with a membrane that is held by the known ones and drawn to zero over `decayCells`:
 * between nearby values it is harmonic, far from any it vanishes; at the rim it leaves without a kink.
 */
export function fillTorus(torus: Torus, decayCells: number): void {
  if (!torus.known.includes(0)) return;
  membrane(torus, decayCells);
  const rim = cellsNearKnown(torus);
  for (let sweep = 0; sweep < PLATE_SWEEPS; sweep++) bend(torus, rim);
}

/**
 * Coarse to fine, each level starting from the coarser one. A few sweeps a level do not solve it to the last digit;
 * smooth is all that is wanted. Source: Bornemann & Deuflhard (1996), The cascadic multigrid method, Numer. Math. 75, 135-152.
 */
function membrane(torus: Torus, decayCells: number): void {
  const { width, height, stride, values, known } = torus;
  if (width > 2 && height > 2) {
    const coarse = coarser(torus);
    membrane(coarse, decayCells / 2);
    interpolate(coarse, torus);
  } else {
    for (let j = 0; j < height; j++) for (let i = 0; i < width; i++) if (!known[j * width + i]) values[j * stride + i] = 0;
  }
  const share = 1 / (4 + 1 / (decayCells * decayCells));
  for (let sweep = 0; sweep < SWEEPS; sweep++) relax(torus, share);
}

function coarser({ width, height, stride, values, known }: Torus): Torus {
  const w = (width + 1) >> 1;
  const h = (height + 1) >> 1;
  const out: Torus = { width: w, height: h, stride: w, values: new Float64Array(w * h), known: new Uint8Array(w * h) };
  for (let j = 0; j < h; j++) {
    for (let i = 0; i < w; i++) {
      let sum = 0, count = 0;
      for (let y = 2 * j; y < Math.min(height, 2 * j + 2); y++) {
        for (let x = 2 * i; x < Math.min(width, 2 * i + 2); x++) {
          if (!known[y * width + x]) continue;
          sum += values[y * stride + x]!;
          count++;
        }
      }
      if (count === 0) continue;
      out.values[j * w + i] = sum / count;
      out.known[j * w + i] = 1;
    }
  }
  return out;
}

function interpolate(coarse: Torus, { width, height, stride, values, known }: Torus): void {
  const { width: w, height: h, values: from } = coarse;
  for (let j = 0; j < height; j++) {
    const near = j >> 1;
    const far = (near + (j % 2 === 0 ? h - 1 : 1)) % h;
    for (let i = 0; i < width; i++) {
      if (known[j * width + i]) continue;
      const a = i >> 1;
      const b = (a + (i % 2 === 0 ? w - 1 : 1)) % w;
      // Centres of cells: a fine one lies a quarter of a coarse cell from the centre of its own.
      values[j * stride + i] = 0.5625 * from[near * w + a]! + 0.1875 * (from[near * w + b]! + from[far * w + a]!) + 0.0625 * from[far * w + b]!;
    }
  }
}

/** One sweep of ∇²z = z/decay², cell after cell. */
function relax({ width, height, stride, values, known }: Torus, share: number): void {
  for (let j = 0; j < height; j++) {
    const up = ((j + height - 1) % height) * stride;
    const here = j * stride;
    const down = ((j + 1) % height) * stride;
    for (let i = 0; i < width; i++) {
      if (known[j * width + i]) continue;
      const left = i === 0 ? width - 1 : i - 1;
      const right = i === width - 1 ? 0 : i + 1;
      values[here + i] = share * (values[up + i]! + values[down + i]! + values[here + left]! + values[here + right]!);
    }
  }
}

/** Cells without a value at most `PLATE_REACH` columns and rows from one with, row after row. */
function cellsNearKnown({ width, height, known }: Torus): Int32Array {
  const sideways = new Uint8Array(known.length);
  for (let j = 0; j < height; j++) {
    const row = j * width;
    // A run-up of the reach before each end takes in what lies round the torus.
    for (let i = -PLATE_REACH, last = -Infinity; i < width; i++) {
      if (known[row + wrap(i, width)]) last = i;
      if (i >= 0 && i - last <= PLATE_REACH) sideways[row + i] = 1;
    }
    for (let i = width - 1 + PLATE_REACH, last = Infinity; i >= 0; i--) {
      if (known[row + wrap(i, width)]) last = i;
      if (i < width && last - i <= PLATE_REACH) sideways[row + i] = 1;
    }
  }
  const near = new Uint8Array(known.length);
  const last = new Int32Array(width);
  const look = (j: number): void => {
    const row = wrap(j, height) * width;
    const inside = j >= 0 && j < height;
    for (let i = 0; i < width; i++) {
      if (sideways[row + i]) last[i] = j;
      if (inside && Math.abs(j - last[i]!) <= PLATE_REACH) near[row + i] = 1;
    }
  };
  const FAR = 2 * PLATE_REACH + 1;
  last.fill(-FAR);
  for (let j = -PLATE_REACH; j < height; j++) look(j);
  last.fill(height + FAR);
  for (let j = height - 1 + PLATE_REACH; j >= 0; j--) look(j);
  let count = 0;
  for (let n = 0; n < near.length; n++) if (near[n] && !known[n]) count++;
  const cells = new Int32Array(count);
  for (let n = 0, at = 0; n < near.length; n++) if (near[n] && !known[n]) cells[at++] = n;
  return cells;
}

function wrap(n: number, size: number): number {
  return n >= 0 && n < size ? n : ((n % size) + size) % size;
}

/** One sweep of ∇⁴z = 0 over the cells listed. */
function bend({ width, height, stride, values }: Torus, cells: Int32Array): void {
  for (const n of cells) {
    const j = Math.floor(n / width);
    const i = n - j * width;
    const here = j * stride;
    const up = ((j + height - 1) % height) * stride;
    const down = ((j + 1) % height) * stride;
    const above = ((j + 2 * height - 2) % height) * stride;
    const below = ((j + 2) % height) * stride;
    const west = i === 0 ? width - 1 : i - 1;
    const east = i === width - 1 ? 0 : i + 1;
    const farWest = west === 0 ? width - 1 : west - 1;
    const farEast = east === width - 1 ? 0 : east + 1;
    const near = values[up + i]! + values[down + i]! + values[here + west]! + values[here + east]!;
    const diagonal = values[up + west]! + values[up + east]! + values[down + west]! + values[down + east]!;
    const far = values[above + i]! + values[below + i]! + values[here + farWest]! + values[here + farEast]!;
    values[here + i] = (8 * near - 2 * diagonal - far) / 20;
  }
}
