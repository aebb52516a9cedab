import type { Area } from '../density/types.js';

export interface PlanLine {
  readonly lineNo: number;
  readonly kind: 'survey' | 'tie';
  /** Order in which lines are walked, from 1; `x0, y0` is where the walk starts. */
  readonly visit: number;
  /** Outing (one charge of a battery, one half day) that the line belongs to, from 1. */
  readonly sortie: number;
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  readonly lengthM: number;
  /** Direction of walking, clockwise from grid north. */
  readonly azimDeg: number;
}

/** What the plan promises for a record before anybody walks. */
export interface PlanChance {
  readonly recordId: string;
  /** Chance that the well lies in ground that the lines search. */
  readonly pCovered: number;
  /** Chance that it lies there and would be detected. */
  readonly pDetect: number;
}

export interface SurveyPlan {
  readonly searchArea: Area;
  readonly spacingM: number;
  readonly lineAzimDeg: number;
  readonly lines: readonly PlanLine[];
  readonly chances: readonly PlanChance[];
  readonly notes: readonly string[];
}
