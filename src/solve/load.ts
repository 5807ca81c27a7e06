// The load vector of the tractions on the plate's edges, and their balance. Plate units, thickness 1.

import { derivativeOn, outwardNormal, pointOn, type Edge, type Plate } from '../case/plate.ts'
import { edgeUnder, type Mesh } from '../mesh/mesh.ts'
import { gaussLegendre } from '../mesh/quadrature.ts'
import type { DofMap } from './dofs.ts'
import { sideDofs, sideFunctions } from './side.ts'

/** Quadrature points beyond the order on a loaded side: tractions along an arc are no polynomials. */
const EXTRA_POINTS = 6

/** Forces on the outer dofs: the integral of shape function times traction along every loaded boundary side. */
export function loadVector(plate: Plate, mesh: Mesh, dofs: DofMap): Float64Array {
  const load = new Float64Array(dofs.outer)
  const rule = gaussLegendre(dofs.order + EXTRA_POINTS)
  const { value } = sideFunctions(dofs.order, rule.point)
  const functions = dofs.order + 1
  for (let b = 0; b < mesh.boundary.count; b++) {
    const edge = edgeUnder(plate, mesh, b)
    if (!edge.traction) continue
    const { dof, sign } = sideDofs(mesh, dofs, b)
    const t0 = mesh.boundary.span[2 * b]
    const t1 = mesh.boundary.span[2 * b + 1]
    for (let q = 0; q < rule.weight.length; q++) {
      const { x, y } = tractionForce(edge, t0 + ((t1 - t0) * (1 + rule.point[q])) / 2)
      const weight = (rule.weight[q] * (t1 - t0)) / 2
      for (let i = 0; i < functions; i++) {
        const n = sign[i] * weight * value[q * functions + i]
        load[dof[i]] += n * x
        load[dof[i] + 1] += n * y
      }
    }
  }
  return load
}

/** Traction times ds/dt at parameter t of a loaded edge. */
function tractionForce({ curve, traction }: Edge, t: number): { x: number; y: number } {
  const [dx, dy] = derivativeOn(curve, t)
  const speed = Math.hypot(dx, dy)
  const [x, y] = traction!(pointOn(curve, t), outwardNormal(curve, t))
  return { x: x * speed, y: y * speed }
}

/** Points a loaded edge for its resultant: exact for a linear traction, and for a cosine on a quarter circle to rounding. */
const RESULTANT_POINTS = 20

/** Resultant force or moment of all tractions over the sum of the magnitudes that make it up, whichever is worse. */
export function imbalance(plate: Plate): number {
  const rule = gaussLegendre(RESULTANT_POINTS)
  let [fx, fy, moment, force, lever] = [0, 0, 0, 0, 0]
  for (const edge of plate.loops.flat()) {
    if (!edge.traction) continue
    for (let q = 0; q < RESULTANT_POINTS; q++) {
      const t = (1 + rule.point[q]) / 2
      const [px, py] = pointOn(edge.curve, t)
      const traction = tractionForce(edge, t)
      const x = (traction.x * rule.weight[q]) / 2
      const y = (traction.y * rule.weight[q]) / 2
      fx += x
      fy += y
      moment += px * y - py * x
      force += Math.hypot(x, y)
      lever += Math.hypot(px, py) * Math.hypot(x, y)
    }
  }
  return force === 0 ? 0 : Math.max(Math.hypot(fx, fy) / force, Math.abs(moment) / lever)
}
