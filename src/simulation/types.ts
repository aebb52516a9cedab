import type { DatumSetting } from '../geodesy/types.js';

/** A place as a pair of numbers, easting and northing in the unit that the scenario's `coordinates` states. */
export type ScenarioPoint = readonly [number, number];
/** Rings of one polygon: the first is the outer one, the others are holes. */
export type ScenarioRings = ReadonlyArray<readonly ScenarioPoint[]>;

/** Steel casing of a well. A positive `pole_am` is a top that attracts (a positive anomaly in the northern hemisphere). */
export interface CasingSource {
  readonly id: string;
  readonly at: ScenarioPoint;
  /** Top of the steel below ground. */
  readonly top_depth_m: number;
  readonly pole_am: number;
  /** Length of the steel; its lower end carries the pole that closes the flux. */
  readonly length_m: number;
  /** Angle off the vertical, and the azimuth that the casing leans towards going down. */
  readonly tilt_deg: number;
  readonly tilt_azimuth_deg: number;
}

/** A steel pipeline along a poly-line: axial remanence that changes at each joint, and transverse induced magnetisation. */
export interface PipelineSource {
  readonly id: string;
  readonly points: readonly ScenarioPoint[];
  readonly depth_m: number;
  readonly joint_m: number;
  /** Standard deviation of a joint's axial pole strength. */
  readonly pole_sd_am: number;
  /** Induced moment along the main field per metre of pipe. */
  readonly induced_am2_m: number;
}

/** Compact iron, a dipole; moment east, north, up. */
export interface ScrapSource {
  readonly id: string;
  readonly at: ScenarioPoint;
  readonly depth_m: number;
  readonly moment_am2: readonly [number, number, number];
}

/** A made field day, as it stands in a scenario file once defaults are filled in. */
export interface Scenario {
  readonly title: string;
  readonly seed: number;
  /** Projected CRS of the survey, `EPSG:…`. */
  readonly frame: string;
  /** Unit of every easting and northing in this scenario. */
  readonly coordinates: 'metres' | 'crs_units';
  readonly parcel: readonly ScenarioRings[];
  readonly exclusions: readonly ScenarioRings[];
  /** First reading, ISO 8601 with zone. */
  readonly start: string;
  /** Frame and epoch in which the satellite receiver gives its positions. */
  readonly receiver: NonNullable<DatumSetting['receiver']>;
  /** Height of the ground above the ellipsoid, for the main field. */
  readonly ground_height_m: number;
  readonly lines: {
    readonly spacing_m: number;
    readonly azimuth_deg: number;
    readonly sensor_height_m: number;
    readonly speed_m_s: number;
    readonly rate_hz: number;
    /** Distance that the walker keeps from the edge of the open ground. */
    readonly margin_m: number;
    /** Walk only each n-th line; 1 for all. */
    readonly every: number;
    /** Perpendicular lines at this spacing after the survey lines; 0 for none. */
    readonly tie_spacing_m: number;
    /** Ground that is not walked. */
    readonly unwalked: ReadonlyArray<{ readonly at: ScenarioPoint; readonly radius_m: number }>;
  };
  readonly walk: {
    /** Standard deviation of the true path to the side of the line. */
    readonly sway_m: number;
    /** Standard deviation of the sensor's true height about the stated one. */
    readonly bob_m: number;
    /** Share by which the walking speed varies. */
    readonly speed_variation: number;
    /** Standard deviation of the sensor's yaw about the course. */
    readonly yaw_deg: number;
    /** Time lost at each turn besides the walk to the next line. */
    readonly turn_s: number;
  };
  readonly position: {
    /** Slow error of the recorded position, standard deviation on each axis. */
    readonly sd_m: number;
    readonly correlation_s: number;
    /** Independent error of each recorded position on each axis. */
    readonly white_m: number;
    /** Time by which the recorded position is older than the reading. */
    readonly lag_s: number;
  };
  readonly sensor: {
    readonly noise_nt: number;
    /** Chance at each reading that a dropout begins, and its longest run in readings. */
    readonly dropout_share: number;
    readonly dropout_run: number;
    readonly spike_share: number;
    readonly spike_nt: number;
  };
  readonly heading: {
    readonly first_nt: number;
    readonly first_phase_deg: number;
    readonly second_nt: number;
    readonly second_phase_deg: number;
  };
  readonly variation: {
    /** Peak to peak of the daily wave. */
    readonly daily_nt: number;
    /** Standard deviation of the pulsations, and their middle period. */
    readonly pulsation_nt: number;
    readonly pulsation_s: number;
  };
  readonly base: {
    readonly interval_s: number;
    readonly noise_nt: number;
    /** Field at the base above the main field there. */
    readonly offset_nt: number;
    readonly lead_s: number;
    /** Times without a base reading, seconds after `start`. */
    readonly gaps: ReadonlyArray<{ readonly from_s: number; readonly length_s: number }>;
    readonly spikes: number;
  };
  readonly geology: {
    readonly slope_nt_km: number;
    readonly slope_azimuth_deg: number;
    /** Smooth random fields: rms and the wavelength about which their waves lie. */
    readonly waves: ReadonlyArray<{ readonly rms_nt: number; readonly wavelength_m: number }>;
  };
  readonly steel: {
    /** Standard deviation of a joint's pole strength as a share of the top's, below the first joint. */
    readonly joint_spread: number;
    /** Chance that a joint below the first is magnetised in reverse. */
    readonly reversed_share: number;
  };
  readonly casings: readonly CasingSource[];
  readonly pipelines: readonly PipelineSource[];
  readonly scrap: readonly ScrapSource[];
  /** Wells whose casing was pulled: they make no field and stand in the truth alone. */
  readonly pulled: ReadonlyArray<{ readonly id: string; readonly at: ScenarioPoint }>;
}

/** The walk as it truly was and as it was written down; flat columns of one length, frame metres. */
export interface Track {
  readonly count: number;
  /** UTC seconds since 1970. */
  readonly timeS: Float64Array;
  /** True place of the sensor; height above ground. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly heightM: Float64Array;
  /** Place as the receiver gave it. */
  readonly recordedX: Float64Array;
  readonly recordedY: Float64Array;
  /** Course of walking and direction of the sensor, clockwise from grid north, degrees. */
  readonly yawDeg: Float64Array;
  /** Number of the line, from 1. */
  readonly line: Int32Array;
}

/** What is in the ground, frame metres. */
export interface Truth {
  readonly frame: string;
  readonly casings: ReadonlyArray<{
    readonly id: string; readonly x: number; readonly y: number; readonly top_depth_m: number; readonly pole_am: number;
    readonly tilt_deg: number;
  }>;
  readonly pipelines: ReadonlyArray<{ readonly id: string; readonly depth_m: number; readonly points: ReadonlyArray<readonly [number, number]> }>;
  readonly scrap: ReadonlyArray<{
    readonly id: string; readonly x: number; readonly y: number; readonly depth_m: number; readonly moment_am2: number;
  }>;
  readonly pulled: ReadonlyArray<{ readonly id: string; readonly x: number; readonly y: number }>;
}

export interface FieldDay {
  /** CSV bytes: `utc,lon,lat,nt,line,sensor_m`; an empty field is a dropout. */
  readonly readings: Uint8Array;
  /** CSV bytes: `utc,nt`. */
  readonly base: Uint8Array;
  readonly truth: Truth;
  readonly track: Track;
  /** Field as the sensor gave it, nT; NaN where it gave none. */
  readonly fieldNT: Float64Array;
}
