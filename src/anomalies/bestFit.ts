import { fitSources, type Fit, type Window } from './fitSources.js';
import type { Source } from './sources.js';

/** Iterations after which the better start is told from the worse. */
const FIRST_STEPS = 4;

/** Of several starts the one that leads furthest down. */
export function bestFit(window: Window, starts: readonly Source[], others: readonly Source[] = []): Fit | null {
  if (starts.length === 1) return fitSources(window, [starts[0]!, ...others]);
  const first = starts
    .map((start) => fitSources(window, [start, ...others], { maxIterations: FIRST_STEPS }))
    .toSorted((a, b) => a.bic - b.bic)[0];
  return first ? fitSources(window, first.sources) : null;
}
