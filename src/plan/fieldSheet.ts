import type { Site } from '../site/types.js';
import { magneticAzimuthDeg, trueAzimuthDeg } from './azimuths.js';
import type { PlanLine, SurveyPlan } from './types.js';

/** One line as the crew needs it on paper. */
export interface FieldSheetRow extends Pick<PlanLine, 'visit' | 'sortie' | 'lineNo' | 'kind' | 'lengthM'> {
  /** Ends in the unit that the CRS is published in (feet where it is in feet), start of walking first. */
  readonly startEast: number;
  readonly startNorth: number;
  readonly endEast: number;
  readonly endNorth: number;
  /** Ends on WGS 84, degrees. */
  readonly startLonDeg: number;
  readonly startLatDeg: number;
  readonly endLonDeg: number;
  readonly endLatDeg: number;
  readonly gridAzimDeg: number;
  readonly trueAzimDeg: number;
  /** What a compass shows at the middle of the parcel on the date of the work. */
  readonly magneticAzimDeg: number;
}

/** Lines in walking order with their ends and directions as they are read in the field. */
export function fieldSheet(plan: SurveyPlan, site: Site): FieldSheetRow[] {
  const { frame, mainField } = site;
  const unit = frame.metresPerUnit;
  const degrees = (x: number, y: number): readonly [number, number] => {
    const { lonDeg, latDeg } = site.toWgs84.place(...frame.inverse(x, y));
    return [lonDeg, latDeg];
  };
  return plan.lines.map(({ visit, sortie, lineNo, kind, lengthM, x0, y0, x1, y1, azimDeg }) => {
    const [startLonDeg, startLatDeg] = degrees(x0, y0);
    const [endLonDeg, endLatDeg] = degrees(x1, y1);
    return {
      visit, sortie, lineNo, kind, lengthM,
      startEast: x0 / unit, startNorth: y0 / unit, endEast: x1 / unit, endNorth: y1 / unit,
      startLonDeg, startLatDeg, endLonDeg, endLatDeg,
      gridAzimDeg: azimDeg, trueAzimDeg: trueAzimuthDeg(azimDeg, mainField), magneticAzimDeg: magneticAzimuthDeg(azimDeg, mainField),
    };
  });
}
