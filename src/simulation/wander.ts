import type { Random } from '../numerics/random.js';

/**
 * A first-order Gauss–Markov (Ornstein–Uhlenbeck) walk: stationary from its first value, standard deviation `sd`,
 * correlation e^(−t/τ). Its exact discretisation holds for any step, so a pause needs no special case.
 * Source: Uhlenbeck & Ornstein 1930; Gelb 1974, Applied Optimal Estimation, section 3.8 (from memory).
 */
export class Wander {
  #value: number;
  readonly #sd: number;
  readonly #correlationS: number;
  readonly #random: Random;

  constructor(random: Random, sd: number, correlationS: number) {
    this.#random = random;
    this.#sd = sd;
    this.#correlationS = correlationS;
    this.#value = sd * random.normal();
  }

  get value(): number {
    return this.#value;
  }

  /** Moves on by `stepS` seconds and returns the new value. */
  step(stepS: number): number {
    const keep = this.#correlationS > 0 ? Math.exp(-stepS / this.#correlationS) : 0;
    this.#value = this.#value * keep + this.#sd * Math.sqrt(1 - keep * keep) * this.#random.normal();
    return this.#value;
  }
}
