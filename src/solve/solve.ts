// Mesh and order in, displacements out: condensed element matrices go straight into the sparse factorisation.

import type { Plate } from '../case/plate.ts'
import { bulgesOf, elementMap } from '../mesh/map.ts'
import { nodeCount, sideCount, triangleCount, type Mesh } from '../mesh/mesh.ts'
import { dofMap, triangleDofs, triangleSigns, type DofMap } from './dofs.ts'
import { condense, elasticity, recoverInner, referenceTriangle, triangleStiffness, type CondensedElement } from './element.ts'
import type { Solution } from './field.ts'
import { imbalance, loadVector } from './load.ts'
import { analyse, factorise, solveRefined, type CliqueGraph } from './sparse/index.ts'

/**
 * Displacements of the plate under its tractions, at one order on one mesh.
 * The tractions balance, so three supports take the rigid-body motions away without a reaction; that is checked.
 * @throws Error when the plate falls apart (a bug: a mesh of one piece does not)
 */
export function solvePlate(plate: Plate, mesh: Mesh, order: number): Solution {
  const dofs = dofMap(mesh, order)
  const load = loadVector(plate, mesh, dofs)
  const elements = condensedElements(plate, mesh, order)
  const graph = cliqueGraph(mesh, dofs)
  const fixed = rigidSupports(mesh, dofs)
  const symbolic = analyse(graph)
  const matrices = elements.map(({ matrix }) => matrix)
  const factor = factorise(symbolic, matrices, fixed)
  const { x, residual } = solveRefined(symbolic, matrices, fixed, factor, load)

  const coefficient = new Float64Array(dofs.all)
  coefficient.set(x)
  let next = dofs.outer
  for (let t = 0; t < triangleCount(mesh); t++) {
    const own = Float64Array.from(triangleDofs(mesh, dofs, t), (dof) => x[dof])
    const inner = recoverInner(elements[t], own)
    coefficient.set(inner, next)
    next += inner.length
  }
  return { plate, mesh, order, coefficient, residual, balance: Math.max(imbalance(plate), reaction(mesh, dofs, elements, fixed, x, load)) }
}

function condensedElements(plate: Plate, mesh: Mesh, order: number): CondensedElement[] {
  const reference = referenceTriangle(order)
  const { count, outer, inner } = reference.modes
  const functions = Int32Array.from([...outer, ...inner])
  const bulges = bulgesOf(plate, mesh, order)
  const moduli = elasticity(plate.nu)
  return Array.from({ length: triangleCount(mesh) }, (_, t) => {
    const sign = triangleSigns(mesh, order, count, t)
    const stiffness = triangleStiffness(reference, elementMap(mesh, bulges, t), moduli, functions, sign)
    return condense(stiffness, 2 * count, 2 * outer.length)
  })
}

/** Which blocks of dofs (nodes, then sides where the order gives them modes) couple: a clique an element. */
function cliqueGraph(mesh: Mesh, { order, perSide }: DofMap): CliqueGraph {
  const nodes = nodeCount(mesh)
  const sides = order > 1 ? sideCount(mesh) : 0
  const perClique = order > 1 ? 6 : 3
  const count = triangleCount(mesh)
  const clique = new Int32Array(perClique * count)
  for (let t = 0; t < count; t++) {
    for (let k = 0; k < 3; k++) {
      clique[perClique * t + k] = mesh.triangle[3 * t + k]
      if (order > 1) clique[perClique * t + 3 + k] = nodes + mesh.triangleSide[3 * t + k]
    }
  }
  return {
    vertices: nodes + sides,
    cliqueStart: Int32Array.from({ length: count + 1 }, (_, t) => perClique * t),
    clique,
    weight: Int32Array.from({ length: nodes + sides }, (_, v) => (v < nodes ? 2 : perSide))
  }
}

/** Marks the three dofs that hold the plate: both of the leftmost node, and y of the rightmost one. */
function rigidSupports(mesh: Mesh, dofs: DofMap): Uint8Array {
  let left = 0
  let right = 0
  for (let node = 1; node < nodeCount(mesh); node++) {
    if (mesh.point[2 * node] < mesh.point[2 * left]) left = node
    if (mesh.point[2 * node] > mesh.point[2 * right]) right = node
  }
  const fixed = new Uint8Array(dofs.outer)
  fixed[2 * left] = 1
  fixed[2 * left + 1] = 1
  fixed[2 * right + 1] = 1
  return fixed
}

/** Largest force at a support over the sum of the loads' magnitudes: zero but for rounding when the loads balance. */
function reaction(
  mesh: Mesh,
  dofs: DofMap,
  elements: readonly CondensedElement[],
  fixed: Uint8Array,
  x: Float64Array,
  load: Float64Array
): number {
  const force = new Map<number, number>()
  fixed.forEach((held, dof) => {
    if (held) force.set(dof, -load[dof])
  })
  for (let t = 0; t < triangleCount(mesh); t++) {
    const own = triangleDofs(mesh, dofs, t)
    own.forEach((dof, i) => {
      const before = force.get(dof)
      if (before === undefined) return
      let sum = 0
      for (let j = 0; j < own.length; j++) sum += elements[t].matrix[i * own.length + j] * x[own[j]]
      force.set(dof, before + sum)
    })
  }
  const total = load.reduce((sum, f) => sum + Math.abs(f), 0)
  return Math.max(...[...force.values()].map(Math.abs)) / total
}
