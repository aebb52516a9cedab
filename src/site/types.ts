import type { Area } from '../density/types.js';
import type { Target } from '../detection/types.js';
import type { MainField } from '../field/types.js';
import type { Crs, DatumShift, Datum } from '../geodesy/types.js';

export type { MainField };

/** What all stages share: the frame, the ground, the main field and the casing that is looked for. */
export interface Site {
  readonly title: string;
  /** The survey's own projected CRS; everything inside is in its metres. */
  readonly frame: Crs;
  /** The ground to be searched, frame metres. */
  readonly parcel: Area;
  /** Ground nobody may walk (house, pond), frame metres; may be empty. */
  readonly exclusions: Area;
  /** Parcel less exclusions, frame metres. */
  readonly open: Area;
  /** Date of the field work as year plus (day of year − 1)/365. */
  readonly decimalYear: number;
  readonly mainField: MainField;
  readonly target: Target;
  /** From a datum to the frame's datum, with the grids and the receiver's frame that the survey file states. */
  shiftFrom(datum: Datum): DatumShift;
  /** From the frame's datum to WGS 84, for RFC 7946 output. */
  readonly toWgs84: DatumShift;
}
