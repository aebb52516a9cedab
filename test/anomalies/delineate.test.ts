import { describe, expect, it } from 'vitest';
import { delineate } from '../../src/anomalies/delineate.js';
import { madeSurvey, plainGrid } from './madeSurvey.js';

describe('delineate', () => {
  const made = madeSurvey(1);
  const { list } = delineate(made.readings, plainGrid(made.readings, { cellM: 1, reachM: 6 }), made.site);
  it.each(made.casings.map((casing, k) => [k, casing] as const))('finds casing %i within a metre', (_, casing) => {
    const hit = list.find((anomaly) => anomaly.class === 'casing' && Math.hypot(anomaly.x - casing.x, anomaly.y - casing.y) < 1);
    expect(hit).toBeDefined();
  });
  it('numbers them by falling deflection', () => {
    expect(list.map((anomaly) => anomaly.anomalyId)).toEqual(list.map((_, k) => `A${k + 1}`));
    expect([...list].sort((a, b) => b.snr - a.snr)).toEqual(list);
  });
});
