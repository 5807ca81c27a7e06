import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { blankCanvas, colourOf, fill } from '../../../src/post/draw/canvas.ts'
import { type Coverage, coverPolygons, type Polygon } from '../../../src/post/draw/coverage.ts'
import { circle, strokeClosed, strokeLine } from '../../../src/post/draw/stroke.ts'
import { expectNear } from '../../support/near.ts'

const ring = (...points: [number, number][]): Polygon => Float64Array.from(points.flat())

function total({ amount }: Coverage): number {
  return amount.reduce((sum, covered) => sum + covered, 0)
}

function at({ x, y, width, amount }: Coverage, px: number, py: number): number {
  return amount[(py - y) * width + px - x]
}

describe('coverPolygons', () => {
  it('covers a rectangle pixel by pixel with its share of each', () => {
    const covered = coverPolygons([ring([1.25, 2.5], [4, 2.5], [4, 5], [1.25, 5])])
    expect([covered.x, covered.y]).toEqual([1, 2])
    expect(at(covered, 1, 2)).toBe(0.375)
    expect(at(covered, 1, 3)).toBe(0.75)
    expect(at(covered, 3, 2)).toBe(0.5)
    expect(at(covered, 2, 4)).toBe(1)
  })

  it('halves the pixels on a diagonal', () => {
    const covered = coverPolygons([ring([0, 0], [3, 0], [0, 3])])
    for (const [x, y] of [[2, 0], [1, 1], [0, 2]]) {
      expectNear(at(covered, x, y), 0.5, { abs: 1e-6, because: 'the diagonal of a square pixel' })
    }
    expectNear(at(covered, 0, 0), 1, { abs: 1e-6, because: 'inside' })
    expect(at(covered, 2, 2)).toBe(0)
  })

  it('covers exactly the area of any triangle, in either sense', () => {
    const coordinate = fc.double({ min: -40, max: 60, noNaN: true })
    fc.assert(
      fc.property(fc.array(coordinate, { minLength: 6, maxLength: 6 }), ([ax, ay, bx, by, cx, cy]) => {
        const area = Math.abs((bx - ax) * (cy - ay) - (by - ay) * (cx - ax)) / 2
        const covered = coverPolygons([ring([ax, ay], [bx, by], [cx, cy])])
        // a pixel below 1e-4 is dropped; a triangle 100 pixels across touches some 300 along its sides
        expectNear(total(covered), area, { rel: 1e-5, abs: 0.03, because: 'coverage is area' })
        expect(covered.amount.every((share) => share >= 0 && share <= 1)).toBe(true)
      }),
      { seed: 417, numRuns: 300 }
    )
  })

  it('leaves a hole empty that winds against its ring', () => {
    const outer = ring([0, 0], [10, 0], [10, 10], [0, 10])
    const covered = coverPolygons([outer, ring([3, 3], [3, 6], [6, 6], [6, 3])])
    expectNear(total(covered), 91, { abs: 1e-5, because: '100 less 9' })
    expect(at(covered, 4, 4)).toBe(0)
  })

  it('gives nothing for nothing', () => {
    expect(coverPolygons([]).amount.length).toBe(0)
    expect(coverPolygons([ring([1, 1], [5, 1])]).amount.length).toBe(0)
  })
})

describe('strokes', () => {
  it('of a square have the area of its frame, corners included', () => {
    const band = coverPolygons(strokeClosed(ring([10, 10], [30, 10], [30, 30], [10, 30]), 3))
    expectNear(total(band), 23 ** 2 - 17 ** 2, { abs: 1e-4, because: 'a mitred frame 3 wide' })
  })

  it('of a circle have the area of its band', () => {
    const band = coverPolygons(strokeClosed(circle(50, 50, 30), 2))
    expectNear(total(band), 2 * Math.PI * 30 * 2, { rel: 2e-3, because: 'chords lie within 0.01 pixels' })
  })

  it('of a straight piece have length times width', () => {
    expectNear(total(coverPolygons([strokeLine(3.2, 4.1, 23.2, 19.1, 1.5)])), 25 * 1.5, { rel: 1e-4, because: '3-4-5' })
  })

  it('take repeated vertices as one', () => {
    const twice = ring([10, 10], [30, 10], [30, 10], [30, 30], [10, 30], [10, 10])
    expectNear(total(coverPolygons(strokeClosed(twice, 3))), 240, { abs: 1e-4, because: 'the same frame' })
  })
})

describe('fill', () => {
  it('mixes by coverage and drops what lies outside the canvas', () => {
    const canvas = blankCanvas(4, 3, 0xffffff)
    fill(canvas, coverPolygons([ring([-5, -5], [1.5, -5], [1.5, 50], [-5, 50])]), 0x000000)
    expect(colourOf(canvas, 0, 0)).toBe(0x000000)
    expect(colourOf(canvas, 1, 2)).toBe(0x808080)
    expect(colourOf(canvas, 2, 1)).toBe(0xffffff)
  })
})
