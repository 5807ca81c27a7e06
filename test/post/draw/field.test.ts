import { describe, expect, it } from 'vitest'
import type { Plate } from '../../../src/case/plate.ts'
import { meshPlate } from '../../../src/mesh/build.ts'
import { bulgesOf, mapPoint, elementMap } from '../../../src/mesh/map.ts'
import type { Mesh } from '../../../src/mesh/mesh.ts'
import { coverPolygons } from '../../../src/post/draw/coverage.ts'
import { extendField, paintField, type Sampler } from '../../../src/post/draw/field.ts'
import { outlineOf, viewOf } from '../../../src/post/draw/view.ts'
import { expectNear } from '../../support/near.ts'
import { circle, plateOf, polygon } from '../../support/plates.ts'

type Field = (x: number, y: number) => [sxx: number, syy: number, sxy: number]

const WIDTH = 320
const HEIGHT = 200

const plate = plateOf([polygon([[0, 0], [1, 0], [1, 0.5], [0, 0.5]], null), circle([0.4, 0.25], 0.1, -1, 0, null)])
const mesh = meshPlate(plate, { raiser: [0], all: 0 }, 'mixed')
const view = viewOf(plate, { left: 10, top: 10, right: 310, bottom: 190 })

/** A field given by a formula, at the points to which the elements' exact maps lead. */
function exactly(on: { plate: Plate; mesh: Mesh }, field: Field): Sampler {
  const bulges = bulgesOf(on.plate, on.mesh, Infinity)
  const at = new Float64Array(6)
  return (element, reference) => {
    const map = elementMap(on.mesh, bulges, element)
    return Float64Array.from({ length: reference.length / 2 }, (_, i) => i).reduce((numbers, i) => {
      mapPoint(map, reference[2 * i], reference[2 * i + 1], at)
      numbers.set([at[0], at[1], 0, 0, ...field(at[0], at[1])], 7 * i)
      return numbers
    }, new Float64Array((7 * reference.length) / 2))
  }
}

function paint(field: Field) {
  const sample = exactly({ plate, mesh }, field)
  return paintField({ mesh, order: 4, sample, quantity: ([sxx]) => sxx, view, width: WIDTH, height: HEIGHT })
}

describe('viewOf', () => {
  it('shows the whole plate as large as the box allows, centred', () => {
    expectNear(view.scale, 300, { rel: 1e-12, because: '1 plate unit on 300 pixels' })
    expectNear(view.y0 - 0.25 * view.scale, 100, { abs: 1e-9, because: 'the middle of the box' })
  })

  it('takes an outer arc into account', () => {
    const disc = plateOf([circle([3, 4], 2, 1, -1, null)])
    const round = viewOf(disc, { left: 0, top: 0, right: 100, bottom: 300 })
    expectNear(round.scale, 25, { rel: 1e-3, because: 'a diameter of 4 on 100 pixels' })
  })
})

describe('outlineOf', () => {
  it('encloses the plate less its hole', () => {
    const covered = coverPolygons(outlineOf(plate, view)).amount.reduce((sum, share) => sum + share, 0)
    expectNear(covered, (0.5 - Math.PI * 0.01) * 300 ** 2, { rel: 1e-4, because: 'chords within 0.01 pixels' })
  })
})

describe('paintField', () => {
  it('gives every pixel inside the plate the linear stress at its centre', () => {
    const { amount } = paint((x, y) => [2 + 3 * x - 4 * y, 0, 0])
    const inside = coverPolygons(outlineOf(plate, view))
    let seen = 0
    inside.amount.forEach((share, i) => {
      if (share < 1) return
      const x = inside.x + (i % inside.width)
      const y = inside.y + Math.floor(i / inside.width)
      const expected = 2 + (3 * (x + 0.5 - view.x0)) / view.scale - (4 * (view.y0 - y - 0.5)) / view.scale
      // no pixel may be left out; linear interpolation of a linear field is exact but for the 32 bits
      expectNear(amount[y * WIDTH + x], expected, { abs: 1e-5, because: `pixel ${x}, ${y}` })
      seen++
    })
    expect(seen).toBeGreaterThan(40_000)
  })

  it('follows a field with a steep gradient', () => {
    const { amount } = paint((x, y) => [0.01 / ((x - 0.4) ** 2 + (y - 0.25) ** 2), 0, 0])
    // above the hole's top, 5 pixels from the edge
    const y = Math.round(view.y0 - 0.35 * view.scale) - 5
    const x = Math.round(view.x0 + 0.4 * view.scale)
    const [px, py] = [(x + 0.5 - view.x0) / view.scale, (view.y0 - y - 0.5) / view.scale]
    const expected = 0.01 / ((px - 0.4) ** 2 + (py - 0.25) ** 2)
    // over a 3 pixel facet: h^2 f'' / 8 with f'' = 6 / r^2 at r = 35 pixels is 0.6 %
    expectNear(amount[y * WIDTH + x], expected, { rel: 6e-3, because: 'interpolated over a 3 pixel facet' })
  })

  it('knows the least and the greatest at the plate\'s own corners', () => {
    const { low, high } = paint((x, y) => [x + y, 0, 0])
    expectNear(low, 0, { abs: 1e-12, because: 'at the lower left corner' })
    expectNear(high, 1.5, { rel: 1e-12, because: 'at the upper right corner' })
  })

  it('paints nothing outside the plate and in its hole', () => {
    const { amount } = paint(() => [1, 0, 0])
    expect(amount[5 * WIDTH + 5]).toBeNaN()
    const centre = Math.round(view.y0 - 0.25 * view.scale) * WIDTH + Math.round(view.x0 + 0.4 * view.scale)
    expect(amount[centre]).toBeNaN()
  })

  it('paints quads by their own reference square', () => {
    const point = Float64Array.of(0, 0, 1, 0, 1, 0.5, 0, 0.5)
    const quad: Mesh = { ...mesh, point, triangle: new Int32Array(0), quad: Int32Array.of(0, 1, 2, 3) }
    const sample: Sampler = (element, reference) => {
      expect(element).toBe(0)
      const numbers = new Float64Array((7 * reference.length) / 2)
      for (let i = 0; i < reference.length / 2; i++) {
        const x = (1 + reference[2 * i]) / 2
        const y = (1 + reference[2 * i + 1]) / 4
        numbers.set([x, y, 0, 0, x - y, 0, 0], 7 * i)
      }
      return numbers
    }
    const quantity = ([sxx]: readonly number[]) => sxx
    const plan = { mesh: quad, order: 2, sample, quantity, view, width: WIDTH, height: HEIGHT }
    const { amount, low, high } = paintField(plan)
    expect([low, high]).toEqual([-0.5, 1])
    const x = 130
    const y = 70
    const expected = (x + 0.5 - view.x0) / view.scale - (view.y0 - y - 0.5) / view.scale
    expectNear(amount[y * WIDTH + x], expected, { abs: 1e-5, because: 'linear' })
  })
})

describe('extendField', () => {
  it('reaches every pixel that the plate touches, with the values beside it', () => {
    const field = paint((x) => [x, 0, 0])
    const inside = coverPolygons(outlineOf(plate, view))
    extendField(field, inside)
    inside.amount.forEach((share, i) => {
      if (share === 0) return
      const x = inside.x + (i % inside.width)
      const y = inside.y + Math.floor(i / inside.width)
      // two pixels to either side at most
      expectNear(field.amount[y * WIDTH + x], (x + 0.5 - view.x0) / view.scale, { abs: 2 / 300, because: `pixel ${x}, ${y}` })
    })
  })
})
