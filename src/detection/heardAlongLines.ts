import type { Heard } from './heard.js';

/** A straight line from where the walk starts to where it ends, frame metres. */
export interface LineToWalk {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export interface WalkOptions {
  /** Distance between readings; a 10 Hz instrument at 1 m/s reads every 0.1 m. */
  readonly stepM: number;
  /** Sensor above ground. */
  readonly heightM: number;
  readonly speedMS: number;
}

/** A brisk walk with a staff-mounted sensor read ten times a second (common practice). */
export const WALK_DEFAULTS: WalkOptions = Object.freeze({ stepM: 0.1, heightM: 1.5, speedMS: 1 });

/** Readings that walking the lines in this order would give; from line to line one walks straight, unheard. */
export function heardAlongLines(lines: readonly LineToWalk[], options: Partial<WalkOptions> = {}): Heard {
  const { stepM, heightM, speedMS } = { ...WALK_DEFAULTS, ...options };
  if (!(stepM > 0 && speedMS > 0)) throw new Error(`heardAlongLines: step ${stepM} m and speed ${speedMS} m/s must be positive`);
  const counts = lines.map((line) => Math.floor(lengthM(line) / stepM) + 1);
  const count = counts.reduce((a, b) => a + b, 0);
  const heard = {
    x: new Float64Array(count), y: new Float64Array(count), heightM: new Float64Array(count).fill(heightM),
    timeS: new Float64Array(count), line: new Int32Array(count), usable: new Uint8Array(count).fill(1),
  };
  let at = 0;
  let time = 0;
  lines.forEach((line, index) => {
    const length = lengthM(line);
    const before = lines[index - 1];
    if (before) time += Math.hypot(line.x0 - before.x1, line.y0 - before.y1) / speedMS;
    for (let k = 0; k < counts[index]!; k++, at++) {
      const share = length > 0 ? (k * stepM) / length : 0;
      heard.x[at] = line.x0 + share * (line.x1 - line.x0);
      heard.y[at] = line.y0 + share * (line.y1 - line.y0);
      heard.timeS[at] = time + (k * stepM) / speedMS;
      heard.line[at] = index;
    }
    time += length / speedMS;
  });
  return heard;
}

function lengthM({ x0, y0, x1, y1 }: LineToWalk): number {
  return Math.hypot(x1 - x0, y1 - y0);
}
