import type { Crs, Datum } from '../geodesy/types.js';
import type { TextTable } from '../table/types.js';

/** Which column of a file of readings holds what. Names are the file's own; only the field and a position are needed. */
export interface ReadingColumns {
  readonly field: string;
  readonly time?: string;
  /** Full GPS week beside seconds of the week in `time`. */
  readonly gpsWeek?: string;
  readonly longitude?: string;
  readonly latitude?: string;
  readonly easting?: string;
  readonly northing?: string;
  readonly line?: string;
  /** Sensor above ground, metres. */
  readonly height?: string;
}

/** Zone of times that name none, or the GPS week they count in, and what the clock was behind by. */
export interface ClockStatement {
  readonly zone?: string;
  readonly gpsWeek?: number;
  /** Added to every time. */
  readonly clockOffsetS?: number;
}

export interface ReadingFile extends ClockStatement {
  readonly table: TextTable;
  readonly columns: ReadingColumns;
  /** CRS of easting and northing. */
  readonly crs?: Crs;
  /** Datum of longitude and latitude; WGS 84 where unsaid, since receivers give that. */
  readonly datum?: Datum;
  /** Sensor above ground of all rows, where no column tells it. */
  readonly sensorHeightM?: number;
}

export interface BaseFile extends ClockStatement {
  readonly table: TextTable;
  readonly columns: { readonly time: string; readonly field: string; readonly gpsWeek?: string };
}

export interface ReadingsSource {
  readonly files: readonly ReadingFile[];
  readonly base?: BaseFile;
}
