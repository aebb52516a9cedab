/**
 * OKLab, a colour space in which equal steps look equal, in its polar form: lightness 0 to 1, chroma, hue in degrees.
 * Source: Ottosson, B., "A perceptual color space for image processing" (2020), with its published matrices.
 */
export interface Oklch {
  readonly lightness: number;
  readonly chroma: number;
  readonly hueDeg: number;
}

export type Rgb = readonly [red: number, green: number, blue: number];

/** Linear light, 0 to 1 where the colour can be shown. */
function linearRgb({ lightness, chroma, hueDeg }: Oklch): Rgb {
  const a = chroma * Math.cos((hueDeg * Math.PI) / 180);
  const b = chroma * Math.sin((hueDeg * Math.PI) / 180);
  const l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3;
  const m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3;
  const s = (lightness - 0.0894841775 * a - 1.291485548 * b) ** 3;
  return [
    4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
    -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
    -0.0041960863 * l - 0.7034186147 * m + 1.707614701 * s,
  ];
}

/** A channel this far outside 0 to 1 still rounds to a colour that can be shown. */
const GAMUT_SLACK = 1e-4;
/** Halvings of chroma: 2^-20 of it is far below one step of eight bits. */
const GAMUT_HALVINGS = 20;

/** sRGB in whole numbers 0 to 255. A colour that sRGB cannot show keeps lightness and hue and loses chroma. */
export function oklchToSrgb(colour: Oklch): Rgb {
  const shown = (chroma: number): boolean => linearRgb({ ...colour, chroma }).every((c) => c >= -GAMUT_SLACK && c <= 1 + GAMUT_SLACK);
  let chroma = colour.chroma;
  if (!shown(chroma)) {
    let low = 0;
    for (let i = 0; i < GAMUT_HALVINGS; i += 1) {
      const middle = (low + chroma) / 2;
      if (shown(middle)) low = middle;
      else chroma = middle;
    }
    chroma = low;
  }
  const [red, green, blue] = linearRgb({ ...colour, chroma });
  return [encode(red), encode(green), encode(blue)];
}

/** OKLab lightness of an sRGB colour. */
export function oklabLightness([red, green, blue]: Rgb): number {
  const [r, g, b] = [decode(red), decode(green), decode(blue)];
  return 0.2104542553 * Math.cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b)
    + 0.793617785 * Math.cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b)
    - 0.0040720468 * Math.cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b);
}

/** Source: IEC 61966-2-1 (sRGB transfer function). */
function encode(linear: number): number {
  const light = Math.min(1, Math.max(0, linear));
  return Math.round(255 * (light <= 0.0031308 ? 12.92 * light : 1.055 * light ** (1 / 2.4) - 0.055));
}

function decode(channel: number): number {
  const value = channel / 255;
  return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
}
