import { describe, expect, it } from 'vitest'
import type { Plate, Point } from '../../src/case/plate.ts'
import type { Segment } from '../../src/mesh/divide.ts'
import { quadCount, triangleCount, type Mesh } from '../../src/mesh/mesh.ts'
import { numberSides } from '../../src/mesh/number.ts'
import { dofMap, elementDofs, firstInner } from '../../src/solve/dofs.ts'
import { edgeStress, FIELD, fieldIn, sideReference, stressAtPoint } from '../../src/solve/field.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { lame, tractionOf, worstStress, type StressField } from '../support/fields.ts'
import { circle, plateOf, polygon } from '../support/plates.ts'
import { expectNear } from '../support/near.ts'

const corners: Point[] = [[0, 0], [2, 0.1], [2.2, 1.8], [-0.1, 2]]

/**
 * Three general convex quads (below, to the right, in the middle) and four triangles (above, on the left); the nodes of the
 * picture are renumbered, so that elements run along shared sides in both senses:
 *
 *     3 --------- 2
 *     | 7 ---- 6  |
 *     | |      |  |
 *     | 4 ---- 5  |
 *     0 --------- 1
 */
function mixedMesh(): Mesh {
  const place: Point[] = [...corners, [0.6, 0.5], [1.5, 0.7], [1.3, 1.4], [0.5, 1.2]]
  const number = [5, 2, 7, 0, 3, 6, 1, 4]
  const point = new Float64Array(16)
  place.forEach(([x, y], i) => point.set([x, y], 2 * number[i]))
  const renumbered = (nodes: number[]) => Int32Array.from(nodes, (i) => number[i])
  const segments = corners.map(
    (_, k): Segment => ({ onEdge: true, a: number[k], b: number[(k + 1) % 4], loop: 0, edge: k, t0: 0, t1: 1 })
  )
  return numberSides(
    point,
    renumbered([2, 3, 6, 7, 6, 3, 3, 0, 7, 4, 7, 0]),
    renumbered([0, 1, 5, 4, 6, 5, 1, 2, 5, 6, 7, 4]),
    segments
  )
}

describe('a mesh of straight triangles and general quads', () => {
  const mesh = mixedMesh()
  const solved = (field: StressField, order: number) =>
    solvePlate(plateOf([polygon(corners, tractionOf(field))], 0.29), mesh, order)

  it('numbers the dofs inside triangles, then those inside quads, behind all others', () => {
    const dofs = dofMap(mesh, 5)
    expect([triangleCount(mesh), quadCount(mesh)]).toEqual([4, 3])
    // 8 nodes, 14 sides of 4 modes, 6 inner functions a triangle, 16 a quad
    expect([dofs.outer, dofs.all]).toEqual([128, 128 + 4 * 12 + 3 * 32])
    expect([0, 3, 4, 6].map((element) => firstInner(dofs, element))).toEqual([128, 164, 176, 240])
    expect([0, 4].map((element) => elementDofs(mesh, dofs, element).length)).toEqual([30, 40])
  })

  it('gives uniform stress exactly at every order', () => {
    const uniform: StressField = () => [0.7, -0.4, 0.3]
    for (let order = 1; order <= 8; order++) {
      expectNear(worstStress(solved(uniform, order), uniform), 0, { abs: 2e-13, because: 'a linear displacement is in the space' })
    }
  })

  // a polynomial of degree n in x and y is one of degree n in xi and in eta on a general quad, so order n has it
  it('gives bending exactly from the order on that has it', () => {
    const bending: StressField = (x, y) => [y, 0.4 * x, 0]
    for (const order of [2, 5, 8]) {
      expectNear(worstStress(solved(bending, order), bending), 0, { abs: 1e-12, because: 'quadratic displacement' })
    }
    expect(worstStress(solved(bending, 1), bending)).toBeGreaterThan(1e-4)
  })

  it('gives a cubic displacement exactly, whose side modes turn their sign with the side', () => {
    // Airy's function x^3 y - x y^3
    const cubic: StressField = (x, y) => [-6 * x * y, 6 * x * y, 3 * y * y - 3 * x * x]
    for (const order of [3, 5, 8]) {
      expectNear(worstStress(solved(cubic, order), cubic), 0, { abs: 1e-11, because: 'cubic displacement' })
    }
  })

  it('has one displacement along a side that a quad and a triangle share, whatever the field', () => {
    const steep: StressField = (x, y) => [-6 * x * y ** 3, 6 * x * y, 3 * y * y - 3 * x * x]
    const solution = solved(steep, 7)
    // from node 0 to node 4 of the picture: eta grows on the quad 0 1 5 4, and falls on the triangle 4 7 0
    const s = [-1, -0.8, -0.1, 0.6, 1]
    const quad = fieldIn(solution, 4, Float64Array.from(s.flatMap((x) => [-1, x])))
    const triangle = fieldIn(solution, 3, Float64Array.from(s.flatMap((x) => [0, (1 - x) / 2])))
    s.forEach((_, q) => {
      for (let i = 0; i < 4; i++) {
        expectNear(quad[FIELD * q + i], triangle[FIELD * q + i], { abs: 1e-13, because: 'x, y, ux, uy are continuous' })
      }
    })
    // the stress is not, which shows that the elements have fields of their own
    expect(Math.abs(quad[4] - triangle[4])).toBeGreaterThan(1e-3)
  })

  it('puts points of a boundary side on the boundary', () => {
    const solution = solved(() => [1, 0, 0], 2)
    for (let b = 0; b < mesh.boundary.count; b++) {
      const reference = sideReference(mesh, b, [-1, 1])
      const [x0, y0, , , , , , x1, y1] = fieldIn(solution, mesh.boundary.element[b], reference)
      const [from, to] = [corners[b], corners[(b + 1) % 4]]
      expectNear(Math.hypot(x0 - from[0], y0 - from[1]), 0, { abs: 1e-15, because: 'starts at the corner' })
      expectNear(Math.hypot(x1 - to[0], y1 - to[1]), 0, { abs: 1e-15, because: 'ends at the next' })
    }
  })

  it('finds the stress at points of triangles and quads', () => {
    const bending: StressField = (x, y) => [y, 0.4 * x, 0]
    const solution = solved(bending, 4)
    for (const [x, y] of [[1, 0.3], [1, 1], [1.9, 1], [0.1, 1], [0.7, 1.6], [0, 0], [0.5, 1.2], [2.2, 1.8]]) {
      const found = stressAtPoint(solution, x, y)
      expect(found, `${x}, ${y}`).not.toBeNull()
      bending(x, y).forEach((s, i) => expectNear(found![i], s, { abs: 1e-12, because: 'exact field' }))
    }
    for (const [x, y] of [[1, 0.04], [2.3, 1], [-0.2, 1], [3, 3]]) expect(stressAtPoint(solution, x, y)).toBeNull()
  })
})

/** The ring in eight sectors between the given radii; quads, those of the outermost layer cut into triangles if wanted. */
function ring(radii: readonly number[], outermost: 'quad' | 'triangle'): { plate: Plate; mesh: Mesh } {
  const plate = plateOf([circle([0, 0], 2, 1, -1, null), circle([0, 0], 1, -1, 0, tractionOf(lame))])
  const point = radii.flatMap((r) =>
    Array.from({ length: 8 }, (_, k) => [r * Math.cos((k * Math.PI) / 4), r * Math.sin((k * Math.PI) / 4)]).flat()
  )
  const at = (layer: number, k: number) => 8 * layer + ((k + 8) % 8)
  const last = radii.length - 1
  const triangle: number[] = []
  const quad: number[] = []
  for (let layer = 0; layer < last; layer++) {
    for (let k = 0; k < 8; k++) {
      const [a, b, c, d] = [at(layer, k), at(layer + 1, k), at(layer + 1, k + 1), at(layer, k + 1)]
      if (layer === last - 1 && outermost === 'triangle') triangle.push(a, b, c, a, c, d)
      else quad.push(a, b, c, d)
    }
  }
  const part = (k: number) => ({ onEdge: true, edge: k >> 1, t0: (k % 2) / 2, t1: ((k % 2) + 1) / 2 })
  const segments = Array.from({ length: 8 }, (_, k): Segment[] => [
    { a: at(last, k), b: at(last, k + 1), loop: 0, ...part(k) },
    { a: at(0, -k), b: at(0, -k - 1), loop: 1, ...part(k) }
  ])
  return { plate, mesh: numberSides(Float64Array.from(point), Int32Array.from(triangle), Int32Array.from(quad), segments.flat()) }
}

describe('Lame: ring of curved quads', () => {
  for (const [name, radii, outermost] of [
    ['eight quads, two arcs each', [1, 2], 'quad'],
    ['a collar of quads in triangles', [1, 1.3, 2], 'triangle']
  ] as const) {
    it(`${name}: the error falls exponentially with the order`, () => {
      const { plate, mesh } = ring(radii, outermost)
      const errors = [2, 4, 6, 8].map((order) => worstStress(solvePlate(plate, mesh, order), lame))
      for (let i = 1; i < 4; i++) expect(errors[i]).toBeLessThan(0.2 * errors[i - 1])
      expect(errors[3]).toBeLessThan(1e-3)
    })
  }

  it('balances', () => {
    const { plate, mesh } = ring([1, 1.3, 2], 'triangle')
    const solution = solvePlate(plate, mesh, 8)
    expect(solution.balance).toBeLessThan(1e-12)
    expect(solution.residual).toBeLessThan(1e-14)
  })

  it('has the hoop stress at the bore', () => {
    const { plate, mesh } = ring([1, 2], 'quad')
    const solution = solvePlate(plate, mesh, 8)
    for (let b = 8; b < 16; b++) {
      for (const stress of edgeStress(solution, b, [-1, -0.8, 0, 0.6, 1])) {
        expectNear(stress, 5 / 3, { rel: 1e-4, because: 'p (b^2 + a^2) / (b^2 - a^2); order 8 on eight quads' })
      }
    }
  })

  it('finds the stress at points of curved quads, on the arc too, and none outside', () => {
    const { plate, mesh } = ring([1, 2], 'quad')
    const solution = solvePlate(plate, mesh, 8)
    for (const [r, angle] of [[1, 0.4], [1.02, -2], [1.5, 3], [1.99, 1.2], [2, 5], [1, 0]]) {
      const [x, y] = [r * Math.cos(angle), r * Math.sin(angle)]
      const found = stressAtPoint(solution, x, y)
      expect(found, `${r}, ${angle}`).not.toBeNull()
      lame(x, y).forEach((s, i) => expectNear(found![i], s, { abs: 1e-4, because: 'exact field' }))
    }
    for (const [x, y] of [[0, 0], [0.99, 0], [0.7, 0.7], [1.42, 1.42], [0, -2.01]]) {
      expect(stressAtPoint(solution, x, y)).toBeNull()
    }
  })
})
