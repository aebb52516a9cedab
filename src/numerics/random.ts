/**
 * Seeded random numbers: xoshiro128** 1.1, its state filled by splitmix32-style mixing of the seed.
 * The same seed gives the same numbers on every machine, since only 32-bit integer arithmetic decides.
 *
 * Source: Blackman & Vigna (2021), Scrambled linear pseudorandom number generators, ACM Trans. Math. Softw. 47(4);
 * Steele, Lea & Flood (2014), Fast splittable pseudorandom number generators, OOPSLA (seeding by a mixed counter).
 */
export class Random {
  #s0: number;
  #s1: number;
  #s2: number;
  #s3: number;
  /** Second value of the last normal pair; NaN where it has been used. */
  #spare = NaN;
  readonly #key: number;

  /** `seed`: any finite number; its 64 bits decide, so 1 and 1.5 are different streams. */
  constructor(seed: number) {
    if (!Number.isFinite(seed)) throw new Error(`Random: seed ${seed} is not finite`);
    const bits = new Uint32Array(new Float64Array([seed + 0]).buffer);
    const mix = counterMixer(murmurFinal(bits[0]! ^ murmurFinal(bits[1]! ^ 0x9e3779b9)));
    this.#key = mix();
    this.#s0 = mix();
    this.#s1 = mix();
    this.#s2 = mix();
    // An all-zero state would stay zero for ever.
    this.#s3 = mix() | 1;
  }

  /** A generator in the given state (four 32-bit words, not all zero), for tests against published outputs. */
  static fromState([s0, s1, s2, s3]: readonly [number, number, number, number]): Random {
    const random = new Random(0);
    random.#s0 = s0 | 0;
    random.#s1 = s1 | 0;
    random.#s2 = s2 | 0;
    random.#s3 = s3 | 0;
    return random;
  }

  /** Next 32 random bits as an integer in [0, 2³²). */
  uint32(): number {
    const scrambled = Math.imul(this.#s1, 5);
    const result = Math.imul((scrambled << 7) | (scrambled >>> 25), 9) >>> 0;
    const shifted = this.#s1 << 9;
    this.#s2 ^= this.#s0;
    this.#s3 ^= this.#s1;
    this.#s1 ^= this.#s2;
    this.#s0 ^= this.#s3;
    this.#s2 ^= shifted;
    this.#s3 = (this.#s3 << 11) | (this.#s3 >>> 21);
    return result;
  }

  /** Uniform in [0, 1) with 53 bits. */
  uniform(): number {
    const high = this.uint32() >>> 5;
    const low = this.uint32() >>> 6;
    return (high * 0x4000000 + low) / 0x20000000000000;
  }

  /** Standard normal. Source: Marsaglia & Bray (1964), polar method, SIAM Review 6(3). */
  normal(): number {
    if (!Number.isNaN(this.#spare)) {
      const value = this.#spare;
      this.#spare = NaN;
      return value;
    }
    let u: number;
    let v: number;
    let s: number;
    do {
      u = 2 * this.uniform() - 1;
      v = 2 * this.uniform() - 1;
      s = u * u + v * v;
    } while (s >= 1 || s === 0);
    const scale = Math.sqrt((-2 * Math.log(s)) / s);
    this.#spare = v * scale;
    return u * scale;
  }

  /** Uniform integer in [0, n), n a positive integer up to 2³², without modulo bias (by rejection). */
  integer(n: number): number {
    if (!Number.isInteger(n) || n < 1 || n > 0x100000000) throw new Error(`Random.integer: ${n} is not an integer in 1 … 2^32`);
    const limit = 0x100000000 - (0x100000000 % n);
    let value: number;
    do value = this.uint32();
    while (value >= limit);
    return value % n;
  }

  /**
   * An independent stream for the part of the work that `label` names. It depends on this generator's seed and the label
   * only, not on how many numbers were drawn before, so a part can be changed without moving the numbers of another.
   */
  fork(label: string): Random {
    const mix = counterMixer(murmurFinal(this.#key ^ fnv1a(label)));
    return new Random((mix() >>> 0) * 0x200000 + (mix() >>> 11));
  }
}

/** 32-bit hash of a label. Source: Fowler, Noll & Vo, FNV-1a (IETF draft-eastlake-fnv). */
function fnv1a(label: string): number {
  let hash = 0x811c9dc5;
  for (let i = 0; i < label.length; i++) {
    const unit = label.charCodeAt(i);
    hash = Math.imul(hash ^ (unit & 0xff), 0x01000193);
    hash = Math.imul(hash ^ (unit >>> 8), 0x01000193);
  }
  return hash;
}

/** Source: Appleby, MurmurHash3 32-bit finalizer. */
function murmurFinal(value: number): number {
  let h = value | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}

/** A counter that steps by the golden ratio, mixed: the scheme of splitmix in 32 bits. */
function counterMixer(start: number): () => number {
  let counter = start | 0;
  return () => {
    counter = (counter + 0x9e3779b9) | 0;
    return murmurFinal(counter);
  };
}
