// From nodes and elements to the Mesh: every side numbered once, boundary sides in the order of loops, edges and parameters.

import type { Segment } from './divide.ts'
import type { Mesh } from './mesh.ts'

/**
 * The mesh of some elements.
 * @param point (x, y) a node; @param triangle three nodes each, @param quad four each, counter-clockwise
 * @param segments the pieces of the boundary, each a side of exactly one element
 */
export function numberSides(point: Float64Array, triangle: Int32Array, quad: Int32Array, segments: readonly Segment[]): Mesh {
  const nodes = point.length / 2
  const numberOf = new Map<number, number>()
  const side: number[] = []
  // of each side the element that had it first, and as which of its sides
  const element: number[] = []
  const local: number[] = []
  const number = (connectivity: Int32Array, corners: number, firstElement: number): Int32Array => {
    const own = new Int32Array(connectivity.length)
    for (let i = 0; i < connectivity.length; i++) {
      const k = i % corners
      const a = connectivity[i]
      const b = connectivity[k === corners - 1 ? i - k : i + 1]
      const key = Math.min(a, b) * nodes + Math.max(a, b)
      let at = numberOf.get(key)
      if (at === undefined) {
        at = side.push(Math.min(a, b), Math.max(a, b)) / 2 - 1
        numberOf.set(key, at)
        element.push(firstElement + (i - k) / corners)
        local.push(k)
      }
      own[i] = at
    }
    return own
  }
  const triangleSide = number(triangle, 3, 0)
  const quadSide = number(quad, 4, triangle.length / 3)

  const ordered = segments.toSorted((s, t) => s.loop - t.loop || s.edge - t.edge || s.t0 - t.t0)
  const boundarySide = Int32Array.from(ordered, ({ a, b }) => numberOf.get(Math.min(a, b) * nodes + Math.max(a, b))!)
  const sideBoundary = new Int32Array(side.length / 2).fill(-1)
  boundarySide.forEach((at, b) => {
    sideBoundary[at] = b
  })
  return {
    point,
    triangle,
    quad,
    side: Int32Array.from(side),
    triangleSide,
    quadSide,
    sideBoundary,
    boundary: {
      count: ordered.length,
      side: boundarySide,
      element: Int32Array.from(boundarySide, (at) => element[at]),
      local: Int32Array.from(boundarySide, (at) => local[at]),
      loop: Int32Array.from(ordered, ({ loop }) => loop),
      edge: Int32Array.from(ordered, ({ edge }) => edge),
      span: Float64Array.from(ordered.flatMap(({ t0, t1 }) => [t0, t1]))
    }
  }
}
