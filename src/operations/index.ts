import { delineate } from './delineate.js';
import { grid } from './grid.js';
import { locate } from './locate.js';
import { plan } from './plan.js';
import { reconcile } from './reconcile.js';
import { reduce } from './reduce.js';
import { report } from './report.js';
import { transform } from './transform.js';
import type { Operation } from './types.js';

/** The operations that come with Ironplat, in the order of the work. A caller adds operations by passing a longer list. */
export const BUILT_IN_OPERATIONS: readonly Operation[] = Object.freeze([locate, plan, reduce, grid, transform, delineate, reconcile, report]);
