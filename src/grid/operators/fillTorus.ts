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
const SWEEPS = 12;

/**
 * Fills the cells that are not known with a membrane that is held by the known ones and drawn to zero over `decayCells`:
 * between nearby values it is harmonic, far from any it vanishes. Coarse to fine, each level starting from the coarser
 * one (Bornemann & Deuflhard 1996, The cascadic multigrid method, Numerische Mathematik 75, 135-152). A few sweeps a
 * level do not solve it to the last digit; smooth is all that is wanted here.
 */
export function fillTorus(torus: Torus, decayCells: number): void {
  if (!torus.known.includes(0)) return;
  if (torus.width > 2 && torus.height > 2) {
    const coarse = coarser(torus);
    fillTorus(coarse, decayCells / 2);
    interpolate(coarse, torus);
  } else {
    const { width, height, stride, values, known } = torus;
    for (let j = 0; j < height; j++) for (let i = 0; i < width; i++) if (!known[j * width + i]) values[j * stride + i] = 0;
  }
  for (let sweep = 0; sweep < SWEEPS; sweep++) relax(torus, 1 / (4 + 1 / (decayCells * decayCells)));
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
