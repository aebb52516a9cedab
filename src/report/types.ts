import type { Anomalies } from '../anomalies/types.js';
import type { Findings } from '../findings/types.js';
import type { SurveyPlan } from '../plan/types.js';
import type { Grid } from '../raster/types.js';
import type { Readings } from '../readings/types.js';
import type { Records } from '../records/types.js';
import type { Site } from '../site/types.js';

/** A file that goes with the report. */
export interface ReportFile {
  readonly name: string;
  readonly format: string;
  readonly title: string;
}

/** What the result was made with. */
export interface ReportProvenance {
  readonly version: string;
  readonly seed: number;
  readonly operations: readonly { readonly id: string; readonly version: string }[];
}

/** All that a report may tell of. Whatever is absent is not told of, and the report says that it is absent. */
export interface ReportContent {
  readonly site: Site;
  readonly records?: Records;
  readonly plan?: SurveyPlan;
  readonly readings?: Readings;
  /** Residual field, nT. */
  readonly residual?: Grid;
  /** Chance, 0 to 1, that the stated casing would have been detected. */
  readonly detection?: Grid;
  readonly anomalies?: Anomalies;
  readonly findings?: Findings;
  /** What was warned of on the way. */
  readonly warnings?: readonly string[];
  readonly files?: readonly ReportFile[];
  /** Published methods that the result rests on. */
  readonly sources?: readonly string[];
  readonly provenance?: ReportProvenance;
}

/** Text of the user's own, and how large the pictures may get. */
export interface ReportOptions {
  /** In place of the survey's title. */
  readonly title: string;
  readonly preparedFor: string;
  readonly preparedBy: string;
  /** A paragraph that stands before the findings. */
  readonly note: string;
  /** Most cells along a picture's longer side; a larger grid is shown by means of its cells. */
  readonly pictureCells: number;
}

export const REPORT_DEFAULTS: ReportOptions = Object.freeze({ title: '', preparedFor: '', preparedBy: '', note: '', pictureCells: 1200 });
