import type { Scenario } from './types.js';

/** What a scenario file need not say. Sizes are those of a quiet day on ordinary ground (common practice). */
export const SCENARIO_DEFAULTS = Object.freeze({
  title: 'made field day',
  seed: 1,
  coordinates: 'crs_units',
  exclusions: [],
  receiver: { frame: 'ITRF2014', epoch: 2026.28 },
  ground_height_m: 0,
  lines: {
    spacing_m: 8, azimuth_deg: 0, sensor_height_m: 1.7, speed_m_s: 1.2, rate_hz: 10, margin_m: 0.5, every: 1,
    tie_spacing_m: 0, unwalked: [],
  },
  walk: { sway_m: 0.3, bob_m: 0.08, speed_variation: 0.08, yaw_deg: 4, turn_s: 6 },
  position: { sd_m: 0.3, correlation_s: 60, white_m: 0.02, lag_s: 0 },
  sensor: { noise_nt: 0.15, dropout_share: 0.0002, dropout_run: 12, spike_share: 0.0003, spike_nt: 800 },
  heading: { first_nt: 1.5, first_phase_deg: 30, second_nt: 0.8, second_phase_deg: 110 },
  variation: { daily_nt: 40, pulsation_nt: 0.8, pulsation_s: 45 },
  base: { interval_s: 3, noise_nt: 0.1, offset_nt: 37, lead_s: 300, gaps: [], spikes: 0 },
  geology: {
    slope_nt_km: 300, slope_azimuth_deg: 60,
    waves: [{ rms_nt: 8, wavelength_m: 200 }, { rms_nt: 1.5, wavelength_m: 40 }, { rms_nt: 0.5, wavelength_m: 8 }],
  },
  steel: { joint_spread: 0.25, reversed_share: 0.04 },
  casings: [],
  pipelines: [],
  scrap: [],
  pulled: [],
} as const satisfies Partial<Scenario>);

/** A casing whose top alone is stated. */
export const CASING_DEFAULTS = Object.freeze({ top_depth_m: 1.5, length_m: 150, tilt_deg: 0, tilt_azimuth_deg: 0 });
export const PIPELINE_DEFAULTS = Object.freeze({ depth_m: 1.2, joint_m: 12, pole_sd_am: 8, induced_am2_m: 1.2 });
