import { it } from 'vitest';
import { planSurvey } from '../../src/plan/planSurvey.js';
import { ring, testSite, rectangle, turned } from './testSite.js';
import { clipAreas } from '../../src/site/clipAreas.js';
it('x', () => {
  // 400 vertices
  const star = (cx: number, cy: number, r: number, n: number, wob: number, k: number) => ring(...Array.from({ length: n }, (_, i): [number, number] => { const a = 2 * Math.PI * i / n; const q = r * (1 + wob * Math.sin(k * a) + wob / 3 * Math.sin((2*k+1) * a)); return [cx + q * Math.cos(a), cy + q * Math.sin(a)]; }));
  const parcel = [[star(0, 0, 800, 400, 0.15, 5)]];
  const holes = Array.from({ length: 20 }, (_, i) => [star(600 * Math.cos(i * 2.4) * Math.sqrt(i / 20), 600 * Math.sin(i * 2.4) * Math.sqrt(i / 20), 30 + i, 20, 0.1, 3)]);
  for (const [p, h, s] of [[parcel, [], 8], [parcel, holes, 8], [turned(parcel as any, 37), turned(holes as any, 37), 8],[parcel, holes, 2]] as any) {
    const t = performance.now();
    const plan = planSurvey(testSite(p, h), null, { spacingM: s });
    console.log(plan.lines.length, (performance.now() - t).toFixed(0), 'ms', plan.notes.filter((_, i) => i !== 1 && i !== 2).join('\n  '));
  }
});
