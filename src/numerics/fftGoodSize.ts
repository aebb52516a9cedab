/** The smallest even number from `least` upwards whose only prime factors are 2, 3 and 5: sizes that the FFT is fast at. */
export function fftGoodSize(least: number): number {
  let best = Infinity;
  for (let five = 1; five < best; five *= 5) {
    for (let three = five; three < best; three *= 3) {
      let size = 2 * three;
      while (size < least) size *= 2;
      if (size < best) best = size;
    }
  }
  return best;
}
