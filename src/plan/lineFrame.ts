import type { Area } from '../density/types.js';

/** Coordinates along a line direction (u) and across it to the right (v), metres from an origin near the ground. */
export interface LineFrame {
  readonly azimDeg: number;
  toUV(x: number, y: number): [u: number, v: number];
  toXY(u: number, v: number): [x: number, y: number];
}

/** Frame whose u axis points along the azimuth (clockwise from grid north). The origin keeps the digits of large coordinates. */
export function lineFrame(azimDeg: number, origin: readonly [x: number, y: number]): LineFrame {
  const azimuth = (azimDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(azimuth), Math.cos(azimuth)];
  const [ox, oy] = origin;
  return {
    azimDeg,
    toUV: (x, y) => [(x - ox) * sin + (y - oy) * cos, (x - ox) * cos - (y - oy) * sin],
    toXY: (u, v) => [ox + u * sin + v * cos, oy + u * cos - v * sin],
  };
}

export function areaToUV(area: Area, frame: LineFrame): Area {
  return area.map((rings) => rings.map((ring) => ring.map(([x, y]) => frame.toUV(x, y))));
}
