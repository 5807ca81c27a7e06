import { describe, expect, it } from 'vitest'
import { pointOn, type Part, type Plate } from '../../src/case/plate.ts'
import { whereOnEdge } from '../../src/post/where.ts'
import { plateFrom } from '../support/case.ts'

const fields = {
  thickness: 8,
  plate: { sections: [{ width: 60, length: 110 }, { width: 40, length: 110 }], fillets: [8] },
  holes: [{ id: 'bore', shape: 'circle', diameter: 16, at: [40, 0] }],
  notches: [
    { id: 'slit', side: 'top', x: 75, depth: 9, radius: 3 },
    { id: 'vee', side: 'bottom', x: 170, depth: 6, radius: 2, angle: 60 }
  ],
  load: { axial: 24000 }
}
const { plate, units } = plateFrom(fields)

/** Words for the point of the plate's edge nearest to (x, y), in mm, among edges of one kind. */
function wordsAt(part: Part, x: number, y: number, of: Plate = plate): string {
  let best = { off: Infinity, loop: 0, edge: 0, t: 0 }
  of.loops.forEach((loop, l) =>
    loop.forEach((edge, e) => {
      if (edge.part !== part) return
      for (let i = 0; i <= 5000; i++) {
        const [px, py] = pointOn(edge.curve, i / 5000)
        const off = Math.hypot(px * of.unit.length - x, py * of.unit.length - y)
        if (off < best.off) best = { off, loop: l, edge: e, t: i / 5000 }
      }
    })
  )
  return whereOnEdge(of, best.loop, best.edge, best.t, units)
}

/** Point at an angle (degrees) on a circle. */
function polar(cx: number, cy: number, r: number, angle: number): [number, number] {
  return [cx + r * Math.cos((angle * Math.PI) / 180), cy + r * Math.sin((angle * Math.PI) / 180)]
}

describe('where on a hole', () => {
  it.each([[0, 'at 0 degrees'], [1, 'at 1 degree '], [88, 'at 88 degrees'], [179, 'at 179 degrees'], [270, 'at 270 degrees'], [355, 'at 355 degrees']])(
    'at %d degrees',
    (angle, words) => {
      const text = wordsAt('hole', ...polar(40, 0, 8, angle))
      expect(text).toContain(words)
      expect(text).toContain('on the edge of the hole, counter-clockwise from +x')
    }
  )
})

describe('where on a fillet', () => {
  it('counts the angle from the narrow edge, and names the side', () => {
    expect(wordsAt('fillet', ...polar(118, 28, 8, 270 - 14))).toBe('14 degrees up the fillet from the narrow edge, upper side')
    expect(wordsAt('fillet', ...polar(118, -28, 8, 90 + 14))).toBe('14 degrees up the fillet from the narrow edge, lower side')
  })

  it('calls the tangent point by its name', () => {
    expect(wordsAt('fillet', 118, 20)).toBe('where the fillet meets the narrow edge, upper side')
  })

  it('counts the same way where the narrow part is on the left', () => {
    const turned = plateFrom({
      ...fields,
      plate: { sections: [{ width: 40, length: 110 }, { width: 60, length: 110 }], fillets: [8] },
      holes: [],
      notches: []
    }).plate
    expect(wordsAt('fillet', ...polar(102, 28, 8, 270 + 20), turned)).toBe('20 degrees up the fillet from the narrow edge, upper side')
  })

  it('counts along the face from its re-entrant end', () => {
    expect(wordsAt('face', 110, 29)).toBe('on the face of the shoulder, 1 mm from its re-entrant end, upper side')
    expect(wordsAt('face', 110, -29.5)).toBe('on the face of the shoulder, 1.5 mm from its re-entrant end, lower side')
  })
})

describe('where on a notch', () => {
  it('counts from the root towards an end of the bar', () => {
    expect(wordsAt('root', 75, 21)).toBe('at the root, upper side')
    expect(wordsAt('root', ...polar(75, 24, 3, 270 - 12))).toBe('12 degrees from the root towards the left end, upper side')
    expect(wordsAt('root', ...polar(75, 24, 3, 270 + 30))).toBe('30 degrees from the root towards the right end, upper side')
    expect(wordsAt('root', ...polar(170, -16, 2, 90 + 25))).toBe('25 degrees from the root towards the left end, lower side')
  })

  it('measures a flank from the mouth', () => {
    expect(wordsAt('flank', 72, 28.8)).toBe('on the left flank, 1.2 mm in from the mouth, upper side')
    expect(wordsAt('flank', 78, 26)).toBe('on the right flank, 4 mm in from the mouth, upper side')
  })
})

describe('where on no raiser', () => {
  it('names the edge and the distance from its nearer end', () => {
    expect(wordsAt('side', 20, 30)).toMatch(/^on .+, 20 mm from its left end$/)
    expect(wordsAt('end', 220, 15)).toMatch(/^on .+, 5 mm from its upper corner$/)
  })

  it('uses the length unit of the case', () => {
    const inches = { ...units, length: 'in' } as const
    const loop = plate.loops[0].findIndex(({ part }) => part === 'end')
    expect(whereOnEdge(plate, 0, loop, 0.5, inches)).toMatch(/ in from its/)
  })
})
