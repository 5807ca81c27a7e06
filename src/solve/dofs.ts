// Which dofs an element has. Blocks of dofs: one a node (x and y), one a side (x and y of each mode of degree 2 .. order).
// Node i has dofs 2i, 2i + 1; side s has 2 (order - 1) dofs from 2 nodes + 2 (order - 1) s on, degree by degree.

import { elementCount, nodeCount, sideCount, type Mesh } from '../mesh/mesh.ts'

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
}

export function dofMap(mesh: Mesh, order: number): DofMap {
  const perSide = 2 * (order - 1)
  const firstSide = 2 * nodeCount(mesh)
  const outer = firstSide + perSide * sideCount(mesh)
  return { order, outer, all: outer + elementCount(mesh) * (order - 1) * Math.max(0, order - 2), firstSide, perSide }
}

/** Outer dofs of a triangle: nodes 0 1 2, then sides 0 1 2 (6 order numbers). */
export function triangleDofs(mesh: Mesh, { order, firstSide, perSide }: DofMap, triangle: number): Int32Array {
  const dofs = new Int32Array(6 * order)
  for (let k = 0; k < 3; k++) {
    const node = mesh.triangle[3 * triangle + k]
    dofs[2 * k] = 2 * node
    dofs[2 * k + 1] = 2 * node + 1
    const first = firstSide + perSide * mesh.triangleSide[3 * triangle + k]
    for (let d = 0; d < perSide; d++) dofs[6 + k * perSide + d] = first + d
  }
  return dofs
}

/**
 * Signs of a triangle's shape functions in the order outer, inner: a side mode of odd degree is -1 where the element runs
 * along the side from its higher to its lower node.
 */
export function triangleSigns(mesh: Mesh, order: number, functions: number, triangle: number): Float64Array {
  const sign = new Float64Array(functions).fill(1)
  for (let k = 0; k < 3; k++) {
    const a = mesh.triangle[3 * triangle + k]
    const b = mesh.triangle[3 * triangle + ((k + 1) % 3)]
    if (a < b) continue
    for (let degree = 3; degree <= order; degree += 2) sign[3 + k * (order - 1) + degree - 2] = -1
  }
  return sign
}
