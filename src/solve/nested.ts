// Condensed element matrices for several orders from one integration. The functions of an order are some of those of every higher order,
// so the stiffness of a lower order is a part of that of the highest one (B. Szabo, I. Babuska, Finite Element Analysis, 1991, ch. 6).

import type { Plate } from '../case/plate.ts'
import { bulgesOf, elementMap, EXACT_FROM } from '../mesh/map.ts'
import { elementCount, triangleCount, type Mesh } from '../mesh/mesh.ts'
import { condense, type CondensedElement } from './condense.ts'
import { elementSigns } from './dofs.ts'
import { elasticity, quadStiffness, referenceQuad, referenceTriangle, triangleStiffness } from './element.ts'
import { quadModes } from './quad.ts'
import { triangleModes, type ElementModes } from './shape.ts'

/**
 * The condensed stiffness of every element (triangles first, then quads) for each of the orders, in their order.
 * @throws RangeError when orders below 3 are asked for together with others: their elements have other curved sides
 */
export function condensedElements(plate: Plate, mesh: Mesh, orders: readonly number[]): CondensedElement[][] {
  const top = Math.max(...orders)
  if (orders.length > 1 && Math.min(...orders) < EXACT_FROM) throw new RangeError(`orders ${orders.join(', ')} have no common elements`)
  const triangle = referenceTriangle(top)
  const quad = referenceQuad(top)
  const bulges = bulgesOf(plate, mesh, top)
  const moduli = elasticity(plate.nu)
  const triangles = triangleCount(mesh)
  const triangleParts = orders.map((order) => leadingDofs(triangle.modes, triangleModes(order), 3))
  const quadParts = orders.map((order) => leadingDofs(quad.modes, quadModes(order), 4))
  const elements: CondensedElement[][] = orders.map(() => [])
  for (let e = 0; e < elementCount(mesh); e++) {
    const map = elementMap(mesh, bulges, e)
    const isTriangle = e < triangles
    const { count } = (isTriangle ? triangle : quad).modes
    const sign = elementSigns(mesh, top, count, e)
    const stiffness = isTriangle ? triangleStiffness(triangle, map, moduli, sign) : quadStiffness(quad, map, moduli, sign)
    orders.forEach((order, k) => {
      const dofs = (isTriangle ? triangleParts : quadParts)[k]
      const own = order === top ? stiffness : partOf(stiffness, 2 * count, dofs)
      elements[k].push(condense(own, dofs.length, (isTriangle ? 6 : 8) * order))
    })
  }
  return elements
}

/** Places in the stiffness of the top order, outer dofs first, of the dofs of a lower order in its own order. */
function leadingDofs(top: ElementModes, low: ElementModes, corners: number): Int32Array {
  const functions: number[] = []
  for (let node = 0; node < corners; node++) functions.push(node)
  for (let side = 0; side < corners; side++) {
    for (let degree = 2; degree <= low.order; degree++) functions.push(corners + side * (top.order - 1) + degree - 2)
  }
  for (let i = 0; i < low.inner.length; i++) functions.push(top.outer.length + i)
  return Int32Array.from(functions.flatMap((f) => [2 * f, 2 * f + 1]))
}

/** Rows and columns `dofs` of a square matrix of the given size. */
function partOf(matrix: Float64Array, size: number, dofs: Int32Array): Float64Array {
  const n = dofs.length
  const part = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    const row = dofs[i] * size
    for (let j = 0; j < n; j++) part[i * n + j] = matrix[row + dofs[j]]
  }
  return part
}
