// The OKLab colour space, in which equal distances look about equal: B. Ottosson, "A perceptual color space for image
// processing", 2020. sRGB by IEC 61966-2-1:1999.

import type { Colour } from './canvas.ts'

/** Lightness 0 to 1, green-red, blue-yellow. */
export type Lab = readonly [lightness: number, a: number, b: number]

/** sRGB components, 0 to 1 where the colour can be shown, not rounded or cut. */
export function srgbOf([lightness, a, b]: Lab): [number, number, number] {
  const l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3
  const m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3
  const s = (lightness - 0.0894841775 * a - 1.291485548 * b) ** 3
  return [
    encode(4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s),
    encode(-1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s),
    encode(-0.0041960863 * l - 0.7034186147 * m + 1.707614701 * s)
  ]
}

/** The 8-bit colour nearest to a lab colour; components that a screen cannot show are cut. */
export function colourOfLab(lab: Lab): Colour {
  const [red, green, blue] = srgbOf(lab).map((part) => Math.round(255 * Math.min(1, Math.max(0, part))))
  return (red << 16) | (green << 8) | blue
}

/** The lab colour of an 8-bit colour. */
export function labOf(colour: Colour): Lab {
  const red = decode((colour >> 16) / 255)
  const green = decode(((colour >> 8) & 255) / 255)
  const blue = decode((colour & 255) / 255)
  const l = Math.cbrt(0.4122214708 * red + 0.5363325363 * green + 0.0514459929 * blue)
  const m = Math.cbrt(0.2119034982 * red + 0.6806995451 * green + 0.1073969566 * blue)
  const s = Math.cbrt(0.0883024619 * red + 0.2817188376 * green + 0.6299787005 * blue)
  return [
    0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s,
    1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s,
    0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s
  ]
}

/** Difference of two lab colours: their distance. */
export function labDistance(p: Lab, q: Lab): number {
  return Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2])
}

function encode(linear: number): number {
  return linear <= 0.0031308 ? 12.92 * linear : 1.055 * linear ** (1 / 2.4) - 0.055
}

function decode(part: number): number {
  return part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4
}
