import { anomalyAt } from './sourceField.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf } from './sources.js';

/** What the source makes right above itself at the usual height, nT. */
export function peakOf({ survey }: SourceMap, { source }: Entry): number {
  return Math.abs(anomalyAt([source], survey.field, [...placeOf(source), survey.reachM + survey.expectedZM]));
}
