import type { SurveyPlan } from '../plan/types.js';
import type { Site } from '../site/types.js';
import { encodeGpx } from '../vector/encodeGpx.js';
import type { Delivered } from './deliver.js';

/** The lines as GPX routes in walking order, for a handheld receiver. */
export function planGpx(plan: SurveyPlan, site: Site): Delivered {
  const place = (x: number, y: number): readonly [number, number] => {
    const there = site.toWgs84.place(...site.frame.inverse(x, y));
    return [there.lonDeg, there.latDeg];
  };
  const routes = plan.lines.toSorted((a, b) => a.visit - b.visit).map((line) => ({
    name: `${line.kind} ${line.lineNo}`,
    description: `visit ${line.visit}, sortie ${line.sortie}, ${line.lengthM.toFixed(1)} m`,
    points: [place(line.x0, line.y0), place(line.x1, line.y1)],
  }));
  return { key: 'plan_gpx', path: 'plan.gpx', title: 'Lines in walking order', mediaType: 'application/gpx+xml', roles: ['plan'], epsg: 4326, content: encodeGpx({ name: site.title, routes }) };
}
