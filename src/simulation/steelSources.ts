import { FOOT_M } from '../units.js';
import type { Random } from '../numerics/random.js';
import type { CasingSource, PipelineSource, Scenario, ScrapSource } from './types.js';

/** Poles as rows of x, y, z (up, ground is 0) and strength m in A·m with its physical sign. */
export type Poles = Array<readonly [number, number, number, number]>;
/** Dipoles as rows of x, y, z and moment east, north, up in A·m². */
export type Dipoles = Array<readonly [number, number, number, number, number, number]>;

/**
 * Joint lengths: API Spec 5CT range 1 (16 to 25 ft), range 2 (25 to 34 ft, the commonest), range 3 (34 to 48 ft).
 * The shares are a working assumption.
 */
const JOINT_RANGES_FT = [[25, 34, 0.7], [16, 25, 0.2], [34, 48, 0.1]] as const;
/** Induced dipoles along a pipe stand this far apart: 3 m away their ripple, e^(−2π·3/2), is a ten-thousandth of their field. */
const PIPE_STEP_M = 2;

function jointLengthM(random: Random): number {
  let u = random.uniform();
  for (const [low, high, share] of JOINT_RANGES_FT) {
    if (u < share) return (low + (high - low) * random.uniform()) * FOOT_M;
    u -= share;
  }
  return 30 * FOOT_M;
}

/**
 * A casing as joints of different magnetisation: a joint of flux q carries −q at its upper and +q at its lower end, so
 * a collar carries the difference of its two joints, the top −q₁ and the far end what closes the flux.
 */
export function casingPoles(casing: CasingSource, steel: Scenario['steel'], random: Random): Poles {
  const tilt = casing.tilt_deg * Math.PI / 180;
  const azimuth = casing.tilt_azimuth_deg * Math.PI / 180;
  const [x, y] = casing.at;
  const at = (lengthM: number): readonly [number, number, number] => [
    x + lengthM * Math.sin(tilt) * Math.sin(azimuth),
    y + lengthM * Math.sin(tilt) * Math.cos(azimuth),
    -casing.top_depth_m - lengthM * Math.cos(tilt),
  ];
  let flux = casing.pole_am;
  const poles: Poles = [[...at(0), -flux]];
  let lengthM = jointLengthM(random);
  while (lengthM < casing.length_m) {
    const sign = random.uniform() < steel.reversed_share ? -1 : 1;
    const next = sign * casing.pole_am * (1 + steel.joint_spread * random.normal());
    poles.push([...at(lengthM), flux - next]);
    flux = next;
    lengthM += jointLengthM(random);
  }
  poles.push([...at(casing.length_m), flux]);
  return poles;
}

/** A pipeline: remanent poles at its joints, and induced dipoles along the unit vector of the main field. */
export function pipelineSources(
  pipe: PipelineSource, unit: readonly [number, number, number], random: Random,
): { poles: Poles; dipoles: Dipoles } {
  const poles: Poles = [];
  const dipoles: Dipoles = [];
  let flux = 0;
  let sinceJointM = Infinity;
  let end: readonly [number, number] = pipe.points[0]!;
  for (let i = 0; i + 1 < pipe.points.length; i++) {
    const [x0, y0] = pipe.points[i]!;
    const [x1, y1] = pipe.points[i + 1]!;
    const steps = Math.max(1, Math.round(Math.hypot(x1 - x0, y1 - y0) / PIPE_STEP_M));
    const stepM = Math.hypot(x1 - x0, y1 - y0) / steps;
    for (let k = 0; k < steps; k++) {
      const t = (k + 0.5) / steps;
      const x = x0 + t * (x1 - x0);
      const y = y0 + t * (y1 - y0);
      if (sinceJointM >= pipe.joint_m) {
        const next = pipe.pole_sd_am * random.normal();
        poles.push([x, y, -pipe.depth_m, flux - next]);
        flux = next;
        sinceJointM = 0;
      }
      sinceJointM += stepM;
      const moment = pipe.induced_am2_m * stepM;
      dipoles.push([x, y, -pipe.depth_m, moment * unit[0], moment * unit[1], moment * unit[2]]);
    }
    end = [x1, y1];
  }
  poles.push([end[0], end[1], -pipe.depth_m, flux]);
  return { poles, dipoles };
}

export function scrapDipole(scrap: ScrapSource): Dipoles[number] {
  return [scrap.at[0], scrap.at[1], -scrap.depth_m, ...scrap.moment_am2];
}
