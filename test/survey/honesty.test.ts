import { describe, expect, it } from 'vitest';
import { DEMO_SEED } from '../../fixtures/demo/generate.js';
import type { Finding } from '../../src/findings/types.js';
import type { Scenario } from '../../src/simulation/types.js';
import { findingOf, runDay, type RunDay } from '../support/fieldDay.js';

/** A worse search of the same ground promises less. Nothing but the scenario changes. */
const pulledOf = (day: RunDay): { finding: Finding; x: number; y: number } => {
  const well = day.truth.wells.find(({ casing }) => !casing)!;
  return { finding: findingOf(day, well.permit_no)!, x: well.x, y: well.y };
};

/**
 * The demo's lines are so dense for its target that p_detect stands at p_covered to six decimals, and a higher or noisier
 * sensor costs nothing that could be told; a weak and deep casing shows what each change costs.
 */
const weakTarget = (survey: Record<string, unknown>): Record<string, unknown> => ({ ...survey, target: { pole_am: [3, 12], depth_m: [0, 4] } });

const WORSE: ReadonlyArray<readonly [string, (scenario: Scenario) => Scenario]> = [
  ['every second line left out', (scenario) => ({ ...scenario, lines: { ...scenario.lines, every: 2 * (scenario.lines.every ?? 1) } })],
  ['the sensor 2 m higher', (scenario) => ({ ...scenario, lines: { ...scenario.lines, sensor_height_m: scenario.lines.sensor_height_m + 2 } })],
  ['twice the noise', (scenario) => ({
    ...scenario,
    sensor: { ...scenario.sensor, noise_nt: 2 * scenario.sensor.noise_nt },
    geology: { ...scenario.geology, waves: scenario.geology.waves.map((wave) => ({ ...wave, rms_nt: 2 * wave.rms_nt })) },
  })],
];

describe('what a search is worth', async () => {
  const before = pulledOf(await runDay(DEMO_SEED, { survey: weakTarget }));

  it.each(WORSE)('falls with %s', async (_, alter) => {
    const after = pulledOf(await runDay(DEMO_SEED, { survey: weakTarget, alter })).finding;
    expect(after.pDetect).toBeLessThan(before.finding.pDetect);
    expect(after.pRemains).toBeGreaterThan(before.finding.pRemains);
  });

  it('falls for the demo\'s own target too with every second line left out', async () => {
    const [own, after] = [pulledOf(await runDay(DEMO_SEED)).finding, pulledOf(await runDay(DEMO_SEED, { alter: WORSE[0]![1] })).finding];
    expect(after.pDetect).toBeLessThan(own.pDetect);
    expect(after.pRemains).toBeGreaterThan(own.pRemains);
  });

  it('is nothing where no line came near', async () => {
    const alter = (scenario: Scenario): Scenario => ({ ...scenario, lines: { ...scenario.lines, unwalked: [{ at: [before.x, before.y], radius_m: 90 }] } });
    const after = pulledOf(await runDay(DEMO_SEED, { survey: weakTarget, alter })).finding;
    expect(after.finding).toBe('not_searched');
    expect(after.pCovered).toBeLessThan(0.05);
  });
});
