// The displacement along one boundary side: its own shape functions, dofs and amplitudes.
// On a side with s from -1 to 1 the functions are (1 - s) / 2, (1 + s) / 2 and, for degree k = 2 .. order, the integrated
// Legendre polynomial (1 - s^2) / 4 times the side kernel, whose slope is -sqrt((2k - 1) / 2) P_{k-1}(s).

import { nodesOf, type Mesh } from '../mesh/mesh.ts'
import type { DofMap } from './dofs.ts'
import { fillSideKernels } from './shape.ts'

/** Values and slopes (d / ds) of the order + 1 functions at the points s, order + 1 numbers a point. */
export function sideFunctions(order: number, s: ArrayLike<number>): { value: Float64Array; slope: Float64Array } {
  const n = order + 1
  const value = new Float64Array(n * s.length)
  const slope = new Float64Array(n * s.length)
  const kernel = new Float64Array(Math.max(1, order))
  const kernelSlope = new Float64Array(Math.max(1, order))
  for (let q = 0; q < s.length; q++) {
    const x = s[q]
    const at = q * n
    value[at] = (1 - x) / 2
    value[at + 1] = (1 + x) / 2
    slope[at] = -0.5
    slope[at + 1] = 0.5
    fillSideKernels(order, x, kernel, kernelSlope)
    for (let k = 2; k <= order; k++) {
      value[at + k] = ((1 - x * x) / 4) * kernel[k - 2]
      slope[at + k] = (-x / 2) * kernel[k - 2] + ((1 - x * x) / 4) * kernelSlope[k - 2]
    }
  }
  return { value, slope }
}

/** The dofs on a boundary side in its own sense (material on the left). */
export interface SideDofs {
  /** The x dof of each of the order + 1 functions; y is the next. */
  readonly dof: Int32Array
  /** 1, or -1 for modes of odd degree where the boundary runs from the higher node to the lower. */
  readonly sign: Float64Array
}

export function sideDofs(mesh: Mesh, { order, firstSide, perSide }: DofMap, b: number): SideDofs {
  const { element, local, side } = mesh.boundary
  const nodes = nodesOf(mesh, element[b])
  const from = nodes[local[b]]
  const to = nodes[(local[b] + 1) % nodes.length]
  const dof = new Int32Array(order + 1)
  const sign = new Float64Array(order + 1).fill(1)
  dof[0] = 2 * from
  dof[1] = 2 * to
  for (let k = 2; k <= order; k++) {
    dof[k] = firstSide + perSide * side[b] + 2 * (k - 2)
    if (from > to && k % 2 === 1) sign[k] = -1
  }
  return { dof, sign }
}
