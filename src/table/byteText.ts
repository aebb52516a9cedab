const FIRST_SIZE = 1 << 16;
const ZERO = 48;
const MINUS = 45;
const POINT = 46;
/** Beyond this a scaled number is no longer an exact integer, so its digits are left to the language. */
const EXACT = 2 ** 53;
/** Digits of 2^53, and as many decimals again. */
const LONGEST = 40;
/** Numbers below this are divided in 32-bit integers, which is several times as fast. */
const SMALL = 2 ** 31;

/** Text that grows as UTF-8 bytes. Numbers are written digit by digit: a survey file holds millions of them. */
export class ByteText {
  #bytes = new Uint8Array(FIRST_SIZE);
  #length = 0;
  readonly #encoder = new TextEncoder();
  readonly #digits = new Uint8Array(LONGEST);

  byte(code: number): void {
    this.#reserve(1);
    this.#bytes[this.#length++] = code;
  }

  text(text: string): void {
    // UTF-8 takes at most three bytes for each UTF-16 unit.
    this.#reserve(text.length * 3);
    for (let i = 0; i < text.length; i++) {
      const code = text.charCodeAt(i);
      if (code > 127) {
        this.#length += this.#encoder.encodeInto(text.slice(i), this.#bytes.subarray(this.#length)).written;
        return;
      }
      this.#bytes[this.#length++] = code;
    }
  }

  /**
   * A number with exactly `decimals` decimals (0 to 15), halves away from zero, no exponent below 1e21 and no minus before a zero;
   * nothing for NaN. An infinity is our bug.
   */
  number(value: number, decimals: number): void {
    if (value !== value) return;
    const scaled = Math.round(Math.abs(value) * POWERS[decimals]!);
    if (!(scaled < EXACT)) {
      if (!Number.isFinite(value)) throw new Error('an infinity cannot be written');
      this.text(value.toFixed(decimals));
      return;
    }
    this.#reserve(LONGEST + 2);
    const digits = this.#digits;
    let count = 0;
    let rest = scaled;
    while (rest >= SMALL) {
      const tenth = Math.floor(rest / 10);
      digits[count++] = rest - tenth * 10;
      rest = tenth;
    }
    for (let small = rest | 0; small > 0; ) {
      const tenth = (small / 10) | 0;
      digits[count++] = small - tenth * 10;
      small = tenth;
    }
    while (count <= decimals) digits[count++] = 0;
    if (value < 0 && scaled > 0) this.#bytes[this.#length++] = MINUS;
    while (count > 0) {
      if (count === decimals) this.#bytes[this.#length++] = POINT;
      this.#bytes[this.#length++] = ZERO + digits[--count]!;
    }
  }

  /** A copy of what was written. */
  toBytes(): Uint8Array {
    return this.#bytes.slice(0, this.#length);
  }

  #reserve(more: number): void {
    if (this.#length + more <= this.#bytes.length) return;
    const larger = new Uint8Array(Math.max(this.#bytes.length * 2, this.#length + more));
    larger.set(this.#bytes.subarray(0, this.#length));
    this.#bytes = larger;
  }
}

const POWERS: readonly number[] = Array.from({ length: 16 }, (_, power) => Number(`1e${power}`));
