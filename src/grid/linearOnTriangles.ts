import Delaunator from 'delaunator';
import type { Grid } from '../raster/types.js';
import { binSamples, indexByCell } from './binSamples.js';
import type { GridFrame, Samples } from './types.js';

/** A cell centre may miss its triangle by this share of the triangle and still lie on its edge: rounding. */
const EDGE_SLACK = 1e-9;

/**
 * Linear interpolation on the Delaunay triangles of the cells' mean readings: the plain reference, without any tuning.
 * Cells outside the convex hull of the readings are NaN; readings on one line give no triangle and so an empty grid.
 */
export function linearOnTriangles(samples: Samples, frame: GridFrame): Grid {
  const { width, height } = frame;
  const values = new Float64Array(width * height).fill(NaN);
  const pins = binSamples(indexByCell(samples, frame), samples.value, width);
  const points = new Float64Array(pins.node.length * 2);
  for (let n = 0; n < pins.node.length; n++) {
    const j = Math.floor(pins.node[n]! / width);
    points[2 * n] = pins.node[n]! - j * width + pins.dx[n]!;
    points[2 * n + 1] = j + pins.dy[n]!;
  }
  const { triangles } = new Delaunator(points);
  for (let t = 0; t < triangles.length; t += 3) {
    fillTriangle({ points, value: pins.value, corners: triangles.subarray(t, t + 3) }, { width, height, values });
  }
  return { ...frame, values };
}

interface Triangle {
  readonly points: Float64Array;
  readonly value: Float64Array;
  readonly corners: Uint32Array;
}

function fillTriangle({ points, value, corners }: Triangle, { width, height, values }: { width: number; height: number; values: Float64Array }): void {
  const [a, b, c] = [corners[0]!, corners[1]!, corners[2]!];
  const [ax, ay, bx, by, cx, cy] = [points[2 * a]!, points[2 * a + 1]!, points[2 * b]!, points[2 * b + 1]!, points[2 * c]!, points[2 * c + 1]!];
  const twice = (bx - ax) * (cy - ay) - (cx - ax) * (by - ay);
  if (twice === 0) return;
  const top = Math.max(0, Math.ceil(Math.min(ay, by, cy) - EDGE_SLACK));
  const bottom = Math.min(height - 1, Math.floor(Math.max(ay, by, cy) + EDGE_SLACK));
  const left = Math.max(0, Math.ceil(Math.min(ax, bx, cx) - EDGE_SLACK));
  const right = Math.min(width - 1, Math.floor(Math.max(ax, bx, cx) + EDGE_SLACK));
  for (let j = top; j <= bottom; j++) {
    for (let i = left; i <= right; i++) {
      const toB = ((i - ax) * (cy - ay) - (cx - ax) * (j - ay)) / twice;
      const toC = ((bx - ax) * (j - ay) - (i - ax) * (by - ay)) / twice;
      if (toB < -EDGE_SLACK || toC < -EDGE_SLACK || toB + toC > 1 + EDGE_SLACK) continue;
      values[j * width + i] = (1 - toB - toC) * value[a]! + toB * value[b]! + toC * value[c]!;
    }
  }
}
