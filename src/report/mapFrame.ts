import { areaBounds } from '../density/area.js';
import { frameUnit } from './format.js';
import type { ReportContent } from './types.js';

/** The piece of ground that a map shows and how it is drawn: metres to units of the drawing, y downwards. */
export interface MapFrame {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
  /** Units of the drawing in a metre. */
  readonly scale: number;
  /** Upper left corner of the map in the drawing. */
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  x(eastM: number): number;
  y(northM: number): number;
  holds(eastM: number, northM: number): boolean;
}

/** Room for the ticks' labels left of and above the map, and the most that the map itself may take. */
const LEFT = 76;
const TOP = 28;
const MOST_WIDE = 700;
const MOST_HIGH = 660;
/** Margin around the ground, as a share of its longer side. */
const MARGIN = 0.05;
/** A record farther off than this share of the ground's longer side is told of, not drawn: it would shrink everything else. */
const FARTHEST_RECORD = 0.35;

/** A map of the parcel, with what was walked, what was found, and the records near it. */
export function mapFrame({ site, anomalies, records, findings }: ReportContent): MapFrame {
  let { west, south, east, north } = areaBounds(site.parcel);
  const reach = FARTHEST_RECORD * Math.max(east - west, north - south);
  const limits = { west: west - reach, south: south - reach, east: east + reach, north: north + reach };
  for (const { x, y } of [...(anomalies?.list ?? []), ...(records?.placed ?? []), ...(findings?.list ?? [])]) {
    if (!(x >= limits.west && x <= limits.east && y >= limits.south && y <= limits.north)) continue;
    west = Math.min(west, x);
    east = Math.max(east, x);
    south = Math.min(south, y);
    north = Math.max(north, y);
  }
  const margin = MARGIN * Math.max(east - west, north - south);
  return frameOf({ west: west - margin, south: south - margin, east: east + margin, north: north + margin });
}

function frameOf(ground: { west: number; south: number; east: number; north: number }): MapFrame {
  const { west, south, east, north } = ground;
  const scale = Math.min(MOST_WIDE / (east - west), MOST_HIGH / (north - south));
  return {
    ...ground, scale, left: LEFT, top: TOP, width: (east - west) * scale, height: (north - south) * scale,
    x: (eastM) => LEFT + (eastM - west) * scale,
    y: (northM) => TOP + (north - northM) * scale,
    holds: (eastM, northM) => eastM >= west && eastM <= east && northM >= south && northM <= north,
  };
}

export interface Tick {
  /** Metres in the frame. */
  readonly at: number;
  /** In the frame's own unit. */
  readonly value: number;
}

/** Ticks at round numbers of the CRS's own unit, between two positions in metres; about `wanted` of them. */
export function ticks(fromM: number, toM: number, options: { metresPerUnit: number; wanted: number }): Tick[] {
  const from = fromM / options.metresPerUnit;
  const to = toM / options.metresPerUnit;
  const step = roundStep((to - from) / options.wanted);
  const list: Tick[] = [];
  for (let i = Math.ceil(from / step); i * step <= to; i += 1) list.push({ at: i * step * options.metresPerUnit, value: i * step });
  return list;
}

/** The largest of 1, 2, 5 × 10ⁿ that is not above the number. */
export function roundStep(size: number): number {
  const power = 10 ** Math.floor(Math.log10(size));
  const digit = size / power;
  return (digit >= 5 ? 5 : digit >= 2 ? 2 : 1) * power;
}

/** Ticks along both sides, in the unit of the survey's CRS. */
export function mapTicks(frame: MapFrame, content: ReportContent): { east: Tick[]; north: Tick[] } {
  const { metres } = frameUnit(content.site.frame);
  const spacing = 130;
  return {
    east: ticks(frame.west, frame.east, { metresPerUnit: metres, wanted: Math.max(2, frame.width / spacing) }),
    north: ticks(frame.south, frame.north, { metresPerUnit: metres, wanted: Math.max(2, frame.height / spacing) }),
  };
}
