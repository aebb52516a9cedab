import type { Finding } from '../findings/types.js';
import type { Site } from '../site/types.js';
import { NBSP, frameUnit, number } from './format.js';
import { html, type Html } from './html.js';

/** Decimals of a degree: a centimetre, below what any reading here is good for. */
const DEGREE_DECIMALS = 7;

/** Easting and northing in the frame's own unit. */
export function framePlace(site: Site, x: number, y: number): { east: string; north: string; symbol: string } {
  const unit = frameUnit(site.frame);
  return { east: number(x / unit.metres, unit.decimals), north: number(y / unit.metres, unit.decimals), symbol: unit.symbol };
}

/** WGS 84 latitude and longitude in degrees, as a receiver takes them. */
export function geographicPlace(site: Site, x: number, y: number): { lat: string; lon: string } {
  const [lon, lat] = site.frame.inverse(x, y);
  const moved = site.toWgs84.place(lon, lat);
  return { lat: moved.latDeg.toFixed(DEGREE_DECIMALS), lon: moved.lonDeg.toFixed(DEGREE_DECIMALS) };
}

/** `E 1 410 812.31, N 328 110.52 ftUS`, kept on one line. */
export function placeWords(site: Site, x: number, y: number): Html {
  const { east, north, symbol } = framePlace(site, x, y);
  return html`<span class="place">E${NBSP}${east}, N${NBSP}${north}${NBSP}${symbol}</span>`;
}

export function hasPlace({ x, y }: Finding): boolean {
  return Number.isFinite(x) && Number.isFinite(y);
}
