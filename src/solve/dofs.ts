// Which dofs an element has. Blocks of dofs: one a node (x and y), one a side (x and y of each mode of degree 2 .. order).
// Node i has dofs 2i, 2i + 1; side s has 2 (order - 1) dofs from 2 nodes + 2 (order - 1) s on, degree by degree.
// The dofs inside the elements follow, element by element: those of the triangles, then those of the quads.

import { nodeCount, nodesOf, quadCount, sideCount, sidesOf, triangleCount, type Mesh } from '../mesh/mesh.ts'
import { quadInnerCount } from './quad.ts'
import { triangleModes } from './shape.ts'

export interface DofMap {
  readonly order: number
  /** Dofs that the global system has: nodes and sides. */
  readonly outer: number
  /** All dofs, those inside the elements included. */
  readonly all: number
  /** First dof of the side blocks. */
  readonly firstSide: number
  /** Dofs a side. */
  readonly perSide: number
  /** Triangles in the mesh: the number of the first quad. */
  readonly triangles: number
  /** Dofs inside each triangle and inside each quad. */
  readonly perTriangle: number
  readonly perQuad: number
}

export function dofMap(mesh: Mesh, order: number):  DofMap {
  const perSide = 2 * (order - 1)
  const firstSide = 2 * nodeCount(mesh)
  const outer = firstSide + perSide * sideCount(mesh)
  const triangles = triangleCount(mesh)
  const perTriangle = 2 * triangleModes(order).inner.length
  const perQuad = 2 * quadInnerCount(order)
  const all = outer + perTriangle * triangles + perQuad * quadCount(mesh)
  return { order, outer, all, firstSide, perSide, triangles, perTriangle, perQuad }
}

/** First of the dofs inside an element. */
export function firstInner({ outer, triangles, perTriangle, perQuad }: DofMap, element: number): number {
  const quad = element - triangles
  return quad < 0 ? outer + perTriangle * element : outer + perTriangle * triangles + perQuad * quad
}

/** Outer dofs of an element: nodes 0 1 2 (3), then sides 0 1 2 (3); 6 order numbers for a triangle, 8 order for a quad. */
export function elementDofs(mesh: Mesh, { order, firstSide, perSide }: DofMap, element: number): Int32Array {
  const nodes = nodesOf(mesh, element)
  const sides = sidesOf(mesh, element)
  const corners = nodes.length
  const dofs = new Int32Array(2 * corners * order)
  for (let k = 0; k < corners; k++) {
    dofs[2 * k] = 2 * nodes[k]
    dofs[2 * k + 1] = 2 * nodes[k] + 1
    const first = firstSide + perSide * sides[k]
    for (let d = 0; d < perSide; d++) dofs[2 * corners + k * perSide + d] = first + d
  }
  return dofs
}

/**
 * Signs of an element's shape functions in the order outer, inner: a side mode of odd degree is -1 where the element runs
 * along the side from its higher to its lower node.
 * @param functions how many it has
 */
export function elementSigns(mesh: Mesh, order: number, functions: number, element: number): Float64Array {
  const nodes = nodesOf(mesh, element)
  const corners = nodes.length
  const sign = new Float64Array(functions).fill(1)
  for (let k = 0; k < corners; k++) {
    if (nodes[k] < nodes[(k + 1) % corners]) continue
    for (let degree = 3; degree <= order; degree += 2) sign[corners + k * (order - 1) + degree - 2] = -1
  }
  return sign
}
