import type { AliquotStep, FootageCalls } from '../../geodesy/sections/types.js';
import { US_SURVEY_FOOT_M } from '../../units.js';
import { isNorthSouth } from './words.js';

/** A section is nominally 80 chains square. */
const SECTION_M = 5280 * US_SURVEY_FOOT_M;
/** Sides of real sections differ from a mile by some tens of feet; a nominal place this far outside its part may yet lie in it. */
const SLACK_M = 100 * US_SURVEY_FOOT_M;

interface Box {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/**
 * What calls beside a part may be measured from, by the size of both in a nominal section of 80 chains: the section, if
 * that leads into the part; the part, if it is wide enough. `1980 FNL 660 FEL, SE/4 NE/4` is from the section's lines, `330
 * FSL 330 FWL, NE/4 SW/4` from the part's. Both may be possible, or neither: then text and part contradict each other.
 */
export function callOrigins(calls: FootageCalls, steps: readonly AliquotStep[]): { readonly section: boolean; readonly part: boolean } {
  const whole: Box = { west: 0, south: 0, east: SECTION_M, north: SECTION_M };
  const part = steps.reduce(within, whole);
  const [x, y] = placeIn(whole, calls);
  const [px, py] = placeIn(part, calls);
  return { section: holds(part, x, y), part: holds(part, px, py) };
}

function placeIn({ west, south, east, north }: Box, calls: FootageCalls): [x: number, y: number] {
  let [x, y] = [Number.NaN, Number.NaN];
  for (const { distanceM, from } of calls) {
    if (isNorthSouth(from)) y = from === 'N' ? north - distanceM : south + distanceM;
    else x = from === 'E' ? east - distanceM : west + distanceM;
  }
  return [x, y];
}

function holds({ west, south, east, north }: Box, x: number, y: number): boolean {
  return x >= west - SLACK_M && x <= east + SLACK_M && y >= south - SLACK_M && y <= north + SLACK_M;
}

function within({ west, south, east, north }: Box, step: AliquotStep): Box {
  const [x, y] = [(west + east) / 2, (south + north) / 2];
  return {
    west: step.includes('E') ? x : west, east: step.includes('W') ? x : east,
    south: step.includes('N') ? y : south, north: step.includes('S') ? y : north,
  };
}
