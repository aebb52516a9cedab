import type { LineDistance } from './lineDistance.js';
import type { Matrix2, TracedPoint } from './tracedPoint.js';
import type { FootageCalls, GroundPlane, PlaneCovariance, Section, Side } from './types.js';

export interface SolvedCalls {
  readonly lines: Readonly<Record<Side, readonly TracedPoint[]>>;
  readonly calls: FootageCalls;
  /** Where the perpendicular of each call meets its line. */
  readonly feet: readonly [LineDistance, LineDistance];
}

export interface CallSpread {
  readonly cov: PlaneCovariance;
  readonly roundingCov: PlaneCovariance;
  readonly measurementCov: PlaneCovariance;
  readonly layerCov: PlaneCovariance;
  readonly byCall: readonly [readonly [number, number], readonly [number, number]];
  /** In plane axes, by index of the vertex. */
  readonly byVertex: ReadonlyArray<{ readonly index: number; readonly jacobian: Matrix2 }>;
}

/**
 * How the errors of calls and vertices move a place. With n₁, n₂ the unit normals at the feet of both perpendiculars,
 * N·δp = δd + Σ n·δ(foot), and a foot follows the two ends of its piece by its place between them. Covariances are in
 * frame metres. Rounding is uniform over the last digit: its variance is resolution²/12.
 */
export function callCovariance(
  section: Section,
  { lines, calls, feet }: SolvedCalls,
  { measureSdM, measureSdShare, vertexSdM }: { readonly measureSdM: number; readonly measureSdShare: number; readonly vertexSdM: number },
): CallSpread {
  const [[ae, an], [be, bn]] = [feet[0].normal, feet[1].normal];
  const sine = ae * bn - an * be;
  const columns = [[bn / sine, -be / sine], [-an / sine, ae / sine]] as const;
  const byIndex = new Map<number, [number, number, number, number]>();
  feet.forEach((foot, call) => {
    const [ce, cn] = columns[call]!;
    const line = lines[calls[call]!.from];
    for (const [point, share] of [[line[foot.piece]!, 1 - foot.along], [line[foot.piece + 1]!, foot.along]] as const) {
      for (const [index, [a, b, c, d]] of point.by) {
        const rowE = share * (foot.normal[0] * a + foot.normal[1] * c);
        const rowN = share * (foot.normal[0] * b + foot.normal[1] * d);
        const sum = byIndex.get(index) ?? [0, 0, 0, 0];
        byIndex.set(index, [sum[0] + ce * rowE, sum[1] + ce * rowN, sum[2] + cn * rowE, sum[3] + cn * rowN]);
      }
    }
  });
  const byVertex = [...byIndex].map(([index, jacobian]) => ({ index, jacobian }));
  const frame = toFrameMatrix(section.plane);
  const ofCalls = (variance: (call: 0 | 1) => number): PlaneCovariance =>
    sum(([0, 1] as const).map((call) => outer(frame.moved(columns[call]!), variance(call))));
  const roundingCov = ofCalls((call) => calls[call].resolutionM ** 2 / 12);
  const measurementCov = ofCalls((call) => measureSdM ** 2 + (measureSdShare * calls[call].distanceM) ** 2);
  const layerCov = sum(byVertex.flatMap(({ jacobian: [a, b, c, d] }) =>
    [outer(frame.moved([a, c]), vertexSdM ** 2), outer(frame.moved([b, d]), vertexSdM ** 2)]));
  return {
    cov: sum([roundingCov, measurementCov, layerCov]), roundingCov, measurementCov, layerCov,
    byCall: [frame.moved(columns[0]), frame.moved(columns[1])], byVertex,
  };
}

/** Small shifts from the plane to the frame: a shift, and a matrix from shifts to shifts. */
export function toFrameMatrix(plane: GroundPlane): { moved(v: readonly [number, number]): [number, number]; turned(m: Matrix2): Matrix2 } {
  const [a, b, c, d] = plane.jacobian;
  const determinant = a * d - b * c;
  return {
    moved: ([e, n]) => [a * e + b * n, c * e + d * n],
    turned: ([p, q, r, s]) => {
      const [m00, m01, m10, m11] = [a * p + b * r, a * q + b * s, c * p + d * r, c * q + d * s];
      return [(m00 * d - m01 * c) / determinant, (m01 * a - m00 * b) / determinant, (m10 * d - m11 * c) / determinant, (m11 * a - m10 * b) / determinant];
    },
  };
}

function outer([x, y]: readonly [number, number], variance: number): PlaneCovariance {
  return [variance * x * x, variance * x * y, variance * y * y];
}

function sum(list: readonly PlaneCovariance[]): PlaneCovariance {
  return list.reduce<[number, number, number]>((total, c) => [total[0] + c[0], total[1] + c[1], total[2] + c[2]], [0, 0, 0]);
}
