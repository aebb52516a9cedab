import { areaM2 } from '../density/area.js';
import { expectation } from '../density/expectation.js';
import type { Area, Density } from '../density/types.js';
import { DETECTION_GRID_DEFAULTS, detectionGrid, type DetectionGrids } from '../detection/detectionGrid.js';
import type { DetectorOptions } from '../detection/detector.js';
import { heardAlongLines, WALK_DEFAULTS } from '../detection/heardAlongLines.js';
import type { Heard } from '../detection/heard.js';
import type { WellRecord } from '../records/types.js';
import { searchArea } from './searchArea.js';
import type { PlanChance, PlanLine } from './types.js';

/** How the survey will listen, and to what. */
export interface Listening extends DetectorOptions {
  /** Sensor above ground, metres. */
  readonly heightM: number;
}

/** Ground that counts for a record's own place; what of its density lies beyond weighs nothing. */
const PLACE_MASS = 1 - 1e-5;
/** Cells of the grid round the places at most, and of the one for blunders: a mean over a mile needs no finer ones. */
const PLACE_CELLS = 40_000;
const BLUNDER_CELLS = 4_000;
/** Readings are taken together over this share of the distance to the source: nothing of a signal is lost on that. */
const POOL_DISTANCES = 0.15;

/**
 * What lines in their walking order promise for each record: the chance that its well lies on ground that is searched, and
 * that it lies there and is detected. Places are counted on a fine grid round them, blunders on a coarse one.
 */
export function planChances(lines: readonly PlanLine[], records: readonly WellRecord[], options: { readonly open: Area; readonly listening: Listening }): PlanChance[] {
  if (records.length === 0) return [];
  const { open, listening } = options;
  const { heard, pooled } = pooledReadings(lines, listening);
  const near = searchArea(records.map(({ density }) => density), open, { mass: PLACE_MASS, marginM: 0 });
  const fine = near.length > 0 ? gridsOver(near, heard, { ...pooled, mostCells: PLACE_CELLS }) : null;
  const coarse = records.some(({ density }) => partsOf(density, 'blunder').parts.length > 0) ? gridsOver(open, heard, { ...pooled, mostCells: BLUNDER_CELLS }) : null;
  return records.map(({ recordId, density }) => {
    const [place, blunder] = [partsOf(density, 'place'), partsOf(density, 'blunder')];
    const over = (of: 'covered' | 'chance'): number => (fine ? expectation(place, fine[of]) : 0) + (coarse ? expectation(blunder, coarse[of]) : 0);
    return { recordId, pCovered: over('covered'), pDetect: over('chance') };
  });
}

function partsOf(density: Density, role: 'place' | 'blunder'): Density {
  return { parts: density.parts.filter((part) => part.role === role && part.weight > 0) };
}

function gridsOver(area: Area, heard: Heard, { mostCells, ...detector }: DetectorOptions & { readonly mostCells: number }): DetectionGrids {
  return detectionGrid(heard, area, { ...detector, cellM: Math.max(DETECTION_GRID_DEFAULTS.cellM, Math.sqrt(areaM2(area) / mostCells)) });
}

/** Readings along the lines, neighbours taken together with the noise that their mean has. */
export function pooledReadings(lines: Parameters<typeof heardAlongLines>[0], listening: Listening): { heard: Heard; pooled: Listening } {
  const { heightM, target, noise } = listening;
  const together = Math.max(1, Math.floor((POOL_DISTANCES * (heightM + target.depthM[0])) / WALK_DEFAULTS.stepM));
  return {
    heard: heardAlongLines(lines, { heightM, stepM: together * WALK_DEFAULTS.stepM }),
    pooled: { ...listening, noise: { ...noise, whiteSdNT: noise.whiteSdNT / Math.sqrt(together) } },
  };
}
