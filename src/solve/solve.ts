// Mesh and order in, displacements out: condensed element matrices go straight into the sparse factorisation.

import type { Plate } from '../case/plate.ts'
import { EXACT_FROM } from '../mesh/map.ts'
import { elementCount, nodeCount, nodesOf, sideCount, sidesOf, type Mesh } from '../mesh/mesh.ts'
import { recoverInner, type CondensedElement } from './condense.ts'
import { dofMap, elementDofs, firstInner, type DofMap } from './dofs.ts'
import type { Solution } from './field.ts'
import { imbalance, loadVector } from './load.ts'
import { condensedElements } from './nested.ts'
import { analyse, factorise, solveRefined, type CliqueGraph } from './sparse/index.ts'

/**
 * Displacements of the plate under its tractions, at one order on one mesh.
 * The tractions balance, so three supports take the rigid-body motions away without a reaction; that is checked.
 * @throws Error when the plate falls apart (a bug: a mesh of one piece does not)
 */
export function solvePlate(plate: Plate, mesh: Mesh, order: number): Solution {
  return solveOrders(plate, mesh, [order])[0]
}

/** The same at several orders, in their order; orders from 3 up share one integration of the elements. */
export function solveOrders(plate: Plate, mesh: Mesh, orders: readonly number[]): Solution[] {
  if (Math.min(...orders) < EXACT_FROM && orders.length > 1) return orders.map((order) => solvePlate(plate, mesh, order))
  const elements = condensedElements(plate, mesh, orders)
  return orders.map((order, k) => solveCondensed(plate, mesh, order, elements[k]))
}

function solveCondensed(plate: Plate, mesh: Mesh, order: number, elements: readonly CondensedElement[]): Solution {
  const dofs = dofMap(mesh, order)
  const load = loadVector(plate, mesh, dofs)
  const graph = cliqueGraph(mesh, dofs)
  const fixed = rigidSupports(mesh, dofs)
  const symbolic = analyse(graph)
  const matrices = elements.map(({ matrix }) => matrix)
  const factor = factorise(symbolic, matrices, fixed)
  const { x, residual } = solveRefined(symbolic, matrices, fixed, factor, load)

  const coefficient = new Float64Array(dofs.all)
  coefficient.set(x)
  elements.forEach((element, e) => {
    const own = Float64Array.from(elementDofs(mesh, dofs, e), (dof) => x[dof])
    coefficient.set(recoverInner(element, own), firstInner(dofs, e))
  })
  const balance = Math.max(imbalance(plate), reaction(mesh, dofs, elements, fixed, x, load))
  return { plate, mesh, order, coefficient, residual, balance }
}

/** Which blocks of dofs (nodes, then sides where the order gives them modes) couple: a clique an element. */
function cliqueGraph(mesh: Mesh, { order, perSide }: DofMap): CliqueGraph {
  const nodes = nodeCount(mesh)
  const sides = order > 1 ? sideCount(mesh) : 0
  const clique: number[] = []
  const cliqueStart = [0]
  for (let element = 0; element < elementCount(mesh); element++) {
    clique.push(...nodesOf(mesh, element))
    if (order > 1) for (const side of sidesOf(mesh, element)) clique.push(nodes + side)
    cliqueStart.push(clique.length)
  }
  return {
    vertices: nodes + sides,
    cliqueStart: Int32Array.from(cliqueStart),
    clique: Int32Array.from(clique),
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
  elements.forEach(({ matrix }, e) => {
    const own = elementDofs(mesh, dofs, e)
    own.forEach((dof, i) => {
      const before = force.get(dof)
      if (before === undefined) return
      let sum = 0
      for (let j = 0; j < own.length; j++) sum += matrix[i * own.length + j] * x[own[j]]
      force.set(dof, before + sum)
    })
  })
  const total = load.reduce((sum, f) => sum + Math.abs(f), 0)
  return Math.max(...[...force.values()].map(Math.abs)) / total
}
