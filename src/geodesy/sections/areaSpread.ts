import { partLines } from './partLines.js';
import type { Matrix2, TracedPoint } from './tracedPoint.js';
import type { AliquotPart, PlaneCovariance, Section } from './types.js';

/**
 * How much the edge of a part moves when the layer's vertices do: covariance of its shift, on average along the edge, for
 * vertices that are off by 1 m on each axis, one independently of the other. Frame axes, m². A line between two corners
 * moves by two thirds of their variance; lines inside the section, between middles of others, by less.
 */
export function areaSpread(section: Section, part: AliquotPart): PlaneCovariance {
  let [length, ee, en, nn] = [0, 0, 0, 0];
  for (const line of Object.values(partLines(section, part))) {
    for (let i = 1; i < line.length; i++) {
      const [a, b] = [line[i - 1]!, line[i]!];
      const piece = Math.hypot(b.east - a.east, b.north - a.north);
      // ∫ of ((1 − t) a + t b)² over the piece is (aa + ab + bb)/3.
      const terms = [shared(a, a), shared(a, b), shared(b, b)];
      length += piece;
      ee += (piece * sum(terms, 0)) / 3;
      en += (piece * sum(terms, 1)) / 3;
      nn += (piece * sum(terms, 2)) / 3;
    }
  }
  const [xe, xn, ye, yn] = section.plane.jacobian;
  const [e, m, n] = [ee / length, en / length, nn / length];
  return [
    xe * xe * e + 2 * xe * xn * m + xn * xn * n,
    xe * ye * e + (xe * yn + xn * ye) * m + xn * yn * n,
    ye * ye * e + 2 * ye * yn * m + yn * yn * n,
  ];
}

/** Covariance between the shifts of two points for unit vertices, its mixed terms averaged: east-east, east-north, north-north. */
function shared(first: TracedPoint, second: TracedPoint): [number, number, number] {
  let [ee, en, nn] = [0, 0, 0];
  for (const [index, [a, b, c, d]] of first.by) {
    const other: Matrix2 | undefined = second.by.get(index);
    if (!other) continue;
    const [e, f, g, h] = other;
    ee += a * e + b * f;
    en += (a * g + b * h + c * e + d * f) / 2;
    nn += c * g + d * h;
  }
  return [ee, en, nn];
}

function sum(terms: ReadonlyArray<readonly [number, number, number]>, k: 0 | 1 | 2): number {
  return terms.reduce((total, term) => total + term[k], 0);
}
