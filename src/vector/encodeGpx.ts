import { UserError } from '../errors.js';
import { formatUtc } from '../table/calendar.js';

export interface GpxRoute {
  readonly name: string;
  readonly description?: string;
  /** Longitude and latitude in degrees on WGS 84, in walking order. */
  readonly points: ReadonlyArray<readonly [lonDeg: number, latDeg: number]>;
}

export interface GpxDocument {
  readonly name: string;
  readonly routes: readonly GpxRoute[];
  /** Time to write into the head, UTC seconds since 1970; none where it is left out, and never the clock's. */
  readonly timeS?: number;
}

/** A centimetre; a handheld receiver shows metres. */
const DECIMALS = 7;

/**
 * Routes as GPX 1.1, for handheld receivers: positions on WGS 84 with 7 decimals (1 cm), the routes in the order given.
 * Source: Topografix GPX 1.1 schema (gpx.xsd), whose order of elements is kept.
 */
export function encodeGpx({ name, routes, timeS }: GpxDocument): Uint8Array {
  const lines = ['<?xml version="1.0" encoding="UTF-8"?>'];
  lines.push('<gpx version="1.1" creator="Ironplat" xmlns="http://www.topografix.com/GPX/1/1" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:schemaLocation="http://www.topografix.com/GPX/1/1 http://www.topografix.com/GPX/1/1/gpx.xsd">');
  lines.push(`  <metadata><name>${escaped(name)}</name>${timeS === undefined ? '' : `<time>${formatUtc(timeS)}</time>`}${boundsOf(routes)}</metadata>`);
  for (const [index, route] of routes.entries()) {
    lines.push('  <rte>', `    <name>${escaped(route.name)}</name>`);
    if (route.description !== undefined) lines.push(`    <desc>${escaped(route.description)}</desc>`);
    lines.push(`    <number>${index + 1}</number>`);
    for (const point of route.points) lines.push(`    <rtept ${attributes(point, route.name)}/>`);
    lines.push('  </rte>');
  }
  lines.push('</gpx>', '');
  return new TextEncoder().encode(lines.join('\n'));
}

function attributes([lonDeg, latDeg]: readonly [number, number], route: string): string {
  if (!(Math.abs(latDeg) <= 90 && Math.abs(lonDeg) <= 180)) {
    throw new UserError({ code: 'position_invalid', where: `route ${route}`, found: `${lonDeg}, ${latDeg}`, wanted: 'longitude and latitude in degrees' });
  }
  return `lat="${latDeg.toFixed(DECIMALS)}" lon="${lonDeg.toFixed(DECIMALS)}"`;
}

function boundsOf(routes: readonly GpxRoute[]): string {
  const points = routes.flatMap(route => route.points);
  if (points.length === 0) return '';
  const [west, south, east, north] = points.reduce(
    ([w, s, e, n], [lon, lat]) => [Math.min(w, lon), Math.min(s, lat), Math.max(e, lon), Math.max(n, lat)], [Infinity, Infinity, -Infinity, -Infinity] as [number, number, number, number],
  );
  return `<bounds minlat="${south.toFixed(DECIMALS)}" minlon="${west.toFixed(DECIMALS)}" maxlat="${north.toFixed(DECIMALS)}" maxlon="${east.toFixed(DECIMALS)}"/>`;
}

/** Characters that XML 1.0 does not hold in any form are left out; those it reserves are written as entities. */
function escaped(text: string): string {
  return text.replace(/[^\t\n\r -\uD7FF\uE000-\uFFFD\u{10000}-\u{10FFFF}]/gu, '').replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
}
