import { describe, expect, it } from 'vitest';
import { DEMO_SEED } from '../../fixtures/demo/generate.js';
import type { Anomaly } from '../../src/anomalies/types.js';
import { findingOf, localNoiseNT, peakNT, runDay } from '../support/fieldDay.js';

/**
 * Made field days through the whole chain. What makes the readings (collar poles, tilted casings, geology, a slow error
 * of position, sway, heading effect, pulsations, scrap, a pipeline) is not what is fitted to them.
 */
const SEEDS = [DEMO_SEED, ...Array.from({ length: 21 }, (_, i) => 101 + i).filter((seed) => seed !== DEMO_SEED).slice(0, 20)];
const LOUD = 10;
const FOUND_M = 1;
/** 95 % point of χ² with two degrees of freedom: −2 ln 0.05. */
const CHI2_95 = -2 * Math.log(0.05);

interface Heard {
  readonly seed: number;
  readonly id: string;
  readonly loudness: number;
  readonly casing: Anomaly | undefined;
  readonly x: number;
  readonly y: number;
}

const heard: Heard[] = [];
const falseCasings: string[] = [];

function within(anomaly: Anomaly, x: number, y: number): boolean {
  const [ee, en, nn] = anomaly.cov;
  const [dx, dy] = [x - anomaly.x, y - anomaly.y];
  return (nn * dx * dx - 2 * en * dx * dy + ee * dy * dy) / (ee * nn - en * en) <= CHI2_95;
}

describe.each(SEEDS)('the field day of seed %i', (seed) => {
  it('finds what is in the ground and says what it did not find', async () => {
    const day = await runDay(seed);
    const casings = day.anomalies.list.filter((anomaly) => anomaly.class === 'casing');
    for (const { id, x, y } of day.truth.casings) {
      const casing = casings.find((anomaly) => Math.hypot(anomaly.x - x, anomaly.y - y) <= FOUND_M);
      heard.push({ seed, id, x, y, casing, loudness: peakNT(day, x, y) / localNoiseNT(day, x, y) });
    }
    for (const casing of casings) {
      if (!day.truth.casings.some(({ x, y }) => Math.hypot(casing.x - x, casing.y - y) <= FOUND_M)) falseCasings.push(`${seed} ${casing.anomalyId}`);
    }

    const lost = heard.filter((one) => one.seed === seed && one.loudness > LOUD && !one.casing).map(({ id, loudness }) => `${id} (${loudness.toFixed(0)} × noise)`);
    expect(lost, 'casings that are loud and were not found').toEqual([]);

    const pulled = day.truth.wells.find(({ casing }) => !casing)!;
    const finding = findingOf(day, pulled.permit_no)!;
    expect(finding.finding).toBe('not_found');
    expect(finding.pRemains).toBeGreaterThan(0);
    expect(finding.pRemains).toBeLessThan(day.records.placed.find(({ recordId }) => recordId === pulled.permit_no)!.pCasing);
    expect(finding.pDetect).toBeLessThanOrEqual(finding.pCovered);

    const silent = day.truth.wells.find(({ permit }) => permit === 'none')!;
    const unrecorded = day.findings.list.filter((one) => one.finding === 'unrecorded').map((one) => Math.hypot(one.x - silent.x, one.y - silent.y));
    expect(Math.min(...unrecorded)).toBeLessThan(FOUND_M);

    const wrong = day.truth.wells.find(({ permit }) => permit === 'wrong_sign')!;
    const [unplaced] = day.records.unplaced;
    expect(day.records.unplaced).toHaveLength(1);
    expect(unplaced!.recordId).toBe(wrong.permit_no);
    expect(unplaced!.value).toMatch(/79°/);
    expect(unplaced!.problem + unplaced!.advice).toMatch(/sign of the longitude.*correct the row/s);
  });
});

describe('all field days together', () => {
  it('keep 90 to 99 % of the true places in the stated 95 % ellipses', () => {
    const found = heard.filter(({ casing }) => casing);
    expect(heard.length).toBeGreaterThan(110);
    const share = found.filter(({ casing, x, y }) => within(casing!, x, y)).length / found.length;
    expect(share).toBeGreaterThanOrEqual(0.9);
    expect(share).toBeLessThanOrEqual(0.99);
  });

  it('call hardly anything a casing that is none', () => {
    expect(falseCasings.length / SEEDS.length, falseCasings.join(', ')).toBeLessThan(0.25);
  });
});
