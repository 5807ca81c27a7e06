// The outline of a bar: its two long sides (profile.ts) and its ends.

import type { PlateNumbers } from './numbers.ts'
import type { Edge, Loop, Point, Section, Traction } from './plate.ts'
import { NO_LENGTH, sideEdges, type EdgeOfSection, type NotchShape, type StepShape } from './profile.ts'

/** What one side of the bar sees of sections, steps and notches. */
export function sideOfBar(numbers: PlateNumbers, side: 1 | -1): { sections: EdgeOfSection[]; steps: StepShape[]; notches: NotchShape[] } {
  const word = side > 0 ? 'top' : 'bottom'
  const firstNotch = numbers.holes.length
  const firstShoulder = firstNotch + numbers.notches.length
  const shoulders = shoulderSteps(numbers)
  return {
    sections: numbers.sections.map(({ x0, x1, centre, width }, i) => ({
      x0,
      x1,
      out: side * centre + width / 2,
      label: numbers.sections.length === 1 ? `the ${word} edge` : `the ${word} edge of section ${i + 1}`
    })),
    steps: numbers.fillets.map((radius, i) => {
      const shoulder = shoulders.indexOf(i)
      return { radius, raiser: shoulder < 0 ? -1 : firstShoulder + shoulder, label: `the shoulder between sections ${i + 1} and ${i + 2}` }
    }),
    notches: numbers.notches.flatMap((notch, i) =>
      notch.sides.includes(side) ? [{ ...notch, raiser: firstNotch + i, label: `notch ${notch.id}` }] : []
    )
  }
}

/** Steps (from 0) that have a height on either side, in order: each is a shoulder. */
export function shoulderSteps({ sections }: PlateNumbers): number[] {
  return sections.slice(1).flatMap((next, i) => (stepSides(sections[i], next).length > 0 ? [i] : []))
}

/** Sides on which two neighbouring sections differ. */
export function stepSides(before: Section, after: Section): (1 | -1)[] {
  const out = ({ centre, width }: Section, side: number) => side * centre + width / 2
  return ([1, -1] as const).filter((side) => Math.abs(out(before, side) - out(after, side)) > NO_LENGTH)
}

/** The bar's outline with free ends, for checks of the geometry. */
export function outlineOf(numbers: PlateNumbers): Loop {
  const free: Traction = () => [0, 0]
  return outerLoop(numbers, free, free, true)
}

/** The outer loop of the bar, counter-clockwise from its lower left corner, with or without its notches. */
export function outerLoop(numbers: PlateNumbers, left: Traction, right: Traction, withNotches: boolean): Loop {
  const chain = (side: 1 | -1): Edge[] => {
    const { sections, steps, notches } = sideOfBar(numbers, side)
    return sideEdges(side, sections, steps, withNotches ? notches : [])
  }
  const lower = chain(-1)
  const upper = chain(1)
  const end = (from: Point, to: Point, traction: Traction, label: string): Edge => ({
    curve: { kind: 'line', from, to },
    raiser: -1,
    part: 'end',
    side: 0,
    origin: 0,
    traction,
    label
  })
  return [
    ...lower,
    end(lower[lower.length - 1].curve.to, upper[0].curve.from, right, 'the right end'),
    ...upper,
    end(upper[upper.length - 1].curve.to, lower[0].curve.from, left, 'the left end')
  ]
}
