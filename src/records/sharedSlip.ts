import { UserError, type ComplaintCode } from '../errors.js';
import type { Slip } from './implausible.js';
import type { RecordSource } from './recordSource.js';
import type { Outcome } from './solveRecord.js';

/** One row alone may be off by any slip; from two on a slip that they all share is the file's. */
const SHARED_SLIP_FROM = 2;

/** A file in which every row with coordinates has the same slip is described wrongly as a whole. */
export class SharedSlip {
  #placed = false;
  #far = 0;
  readonly #kinds = new Map<Slip['kind'], Slip>();

  count(outcome: Outcome): void {
    if ('record' in outcome) this.#placed = true;
    else if (outcome.slip !== null) {
      this.#far++;
      this.#kinds.set(outcome.slip.kind, outcome.slip);
    }
  }

  refuse(source: RecordSource): void {
    if (this.#placed || this.#far < SHARED_SLIP_FROM || this.#kinds.size !== 1) return;
    const [{ kind, words }] = [...this.#kinds.values()] as [Slip];
    throw sharedSlip(source, { kind, words, rows: this.#far });
  }
}

function sharedSlip(source: RecordSource, { kind, words, rows }: Pick<Slip, 'kind' | 'words'> & { rows: number }): UserError {
  const swapped = kind === 'swapped' || kind === 'swapped_sign';
  const code: ComplaintCode = swapped ? 'coordinates_swapped' : 'position_invalid';
  const advice = {
    swapped: 'exchange the two column names in the survey file',
    swapped_sign: 'exchange the two column names in the survey file and correct the sign of the longitudes in the file',
    longitude_sign: 'write west longitudes with a minus sign or a W, or state "west_positive": true for the file',
    latitude_sign: 'write north latitudes without a minus sign',
    metres: 'state a CRS whose unit is the metre',
    feet: 'state a CRS whose unit is the foot',
    utm_zone: 'state the CRS of the zone that the coordinates are in',
  }[kind];
  return new UserError({
    code, where: source.name, found: `no row within reach of the parcel, though ${rows} would be with ${words}`,
    wanted: 'positions near the parcel', advice,
  });
}
