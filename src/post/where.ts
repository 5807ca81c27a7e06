// A place on the plate's edge in the words of a drawing: "14 degrees up the fillet from the narrow edge, upper side".

import { lengthOf, pointOn, type Arc, type Edge, type Plate, type Point } from '../case/plate.ts'
import { LENGTH_UNITS } from '../case/units.ts'
import type { Verdict } from './verdict.ts'
import { plainNumber } from './format.ts'

const DEGREES = 180 / Math.PI

/** Angles below this, in degrees, are called by the point that they are counted from. */
const AT_THE_POINT = 0.5

/**
 * The place at parameter `t` (0 to 1) of edge `edge` of loop `loop`, in words; distances in the case's length unit.
 */
export function whereOnEdge(plate: Plate, loop: number, edge: number, t: number, units: Verdict['units']): string {
  const place = plate.loops[loop][edge]
  const point = pointOn(place.curve, t)
  const length = (plateLength: number) =>
    `${plainNumber((plateLength * plate.unit.length) / LENGTH_UNITS[units.length], 3)} ${units.length}`
  switch (place.part) {
    case 'hole':
      return onHole(plate, loop, point)
    case 'fillet':
      return onSide(upFillet(place, t), place)
    case 'root':
      return onSide(fromRoot(place, t, point), place)
    case 'flank':
      return onSide(onFlank(plate, place, point, length), place)
    case 'face':
      return onSide(`on the face of the shoulder, ${length(alongFace(place, point))} from its re-entrant end`, place)
    case 'side':
      return `on ${place.label}, ${length(lengthOf(place.curve) * Math.min(t, 1 - t))} from its ${nearerEnd(place, t)} end`
    case 'end':
      return `on ${place.label}, ${length(lengthOf(place.curve) * Math.min(t, 1 - t))} from its ${nearerEnd(place, t)} corner`
  }
}

function onSide(words: string, { side }: Edge): string {
  return side === 0 ? words : `${words}, ${side > 0 ? 'upper' : 'lower'} side`
}

/** Whole degrees in words. */
function degrees(radians: number): string {
  const whole = Math.round(radians * DEGREES)
  return whole === 1 ? '1 degree' : `${whole} degrees`
}

function onHole(plate: Plate, loop: number, [x, y]: Point): string {
  const hole = plate.raisers.find((raiser) => raiser.kind === 'hole' && raiser.loop === loop)
  if (hole?.kind !== 'hole') return 'on the edge of a hole'
  const [x0, y0, x1, y1] = hole.box
  const turn = Math.atan2(y - (y0 + y1) / 2, x - (x0 + x1) / 2)
  // -0.4 degrees is 0, not 360
  const angle = Math.round(turn * DEGREES) < 0 ? turn + 2 * Math.PI : turn
  return `at ${degrees(angle)} on the edge of the hole, counter-clockwise from +x`
}

/** Angle on an arc between `t` and the parameter that its words are counted from. */
function fromOrigin(arc: Arc, origin: number, t: number): number {
  return Math.abs((t - origin) * arc.sweep)
}

function upFillet({ curve, origin }: Edge, t: number): string {
  if (curve.kind !== 'arc') return 'on the fillet'
  const angle = fromOrigin(curve, origin, t)
  if (angle * DEGREES < AT_THE_POINT) return 'where the fillet meets the narrow edge'
  return `${degrees(angle)} up the fillet from the narrow edge`
}

function fromRoot({ curve, origin }: Edge, t: number, point: Point): string {
  if (curve.kind !== 'arc') return 'at the root'
  const angle = fromOrigin(curve, origin, t)
  if (angle * DEGREES < AT_THE_POINT) return 'at the root'
  const root = pointOn(curve, origin)
  return `${degrees(angle)} from the root towards the ${point[0] < root[0] ? 'left' : 'right'} end`
}

function onFlank(plate: Plate, { curve, raiser, side }: Edge, point: Point, length: (plateLength: number) => string): string {
  const notch = plate.raisers[raiser]
  const middle = notch.kind === 'notch' ? notch.x : (curve.from[0] + curve.to[0]) / 2
  const mouth = side * Math.max(side * curve.from[1], side * curve.to[1])
  return `on the ${point[0] < middle ? 'left' : 'right'} flank, ${length(Math.abs(mouth - point[1]))} in from the mouth`
}

/** Distance from the face's end at the narrow edge (or at its fillet), which is the end nearer the bar's middle. */
function alongFace({ curve, side }: Edge, [x, y]: Point): number {
  const [fx, fy] = side * curve.from[1] < side * curve.to[1] ? curve.from : curve.to
  return Math.hypot(x - fx, y - fy)
}

function nearerEnd({ curve, part }: Edge, t: number): string {
  const near = t < 0.5 ? curve.from : curve.to
  const far = t < 0.5 ? curve.to : curve.from
  if (part === 'end') return near[1] < far[1] ? 'lower' : 'upper'
  return near[0] < far[0] ? 'left' : 'right'
}
