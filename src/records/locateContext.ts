import type { KnownShapes } from '../density/drawnEllipse.js';
import type { SectionLayer } from '../geodesy/sections/sectionLayer.js';
import type { Site } from '../site/types.js';
import type { Reach } from './farFromParcel.js';
import type { FullSettings, RecordSource } from './recordSource.js';
import type { SectionWays } from './solveSection.js';
import type { Repair } from './types.js';

/** What every row of a file is solved with. */
export interface LocateContext {
  readonly source: RecordSource;
  /** Those of the source, with what it says nothing about. */
  readonly settings: FullSettings;
  readonly site: Site;
  readonly reach: Reach;
  readonly layer: SectionLayer | null;
  readonly ways: Pick<SectionWays, 'sectionSdM' | 'callSdM' | 'callSdShare' | 'areas'>;
  /** Chance below which two places do not agree. */
  readonly disagreeBelow: number;
  readonly blunderRadiusM: number;
  readonly shapes: KnownShapes;
}

/** A repair before its row is known to it. */
export type RowRepair = Omit<Repair, 'recordId' | 'source' | 'row'>;
