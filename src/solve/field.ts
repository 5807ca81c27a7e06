// Displacement and stress anywhere in the plate, from the elements' own shape functions.

import { outwardNormal, pointOn, type Plate } from '../case/plate.ts'
import { bulgesOf, mapPoint, sideTangent, elementMap, type ElementMap } from '../mesh/map.ts'
import { edgeUnder, elementCount, nodesOf, type Mesh } from '../mesh/mesh.ts'
import { dofMap, elementDofs, elementSigns, firstInner } from './dofs.ts'
import { elasticity } from './element.ts'
import { quadShape } from './quad.ts'
import { triangleShape, type ElementModes, type ElementShape } from './shape.ts'
import { sideDofs, sideFunctions } from './side.ts'

/** The solved plate. Plate units: E = 1, thickness 1; stresses times `plate.unit.stress` are MPa. */
export interface Solution {
  readonly plate: Plate
  readonly mesh: Mesh
  readonly order: number
  /** All amplitudes: the outer dofs, then those inside each element (see dofs.ts). */
  readonly coefficient: Float64Array
  /** |Ku - f| / (|K| |u| + |f|) of the condensed system, maximum norms. */
  readonly residual: number
  /** Unbalanced load, relative: of the tractions themselves, or the reactions at the supports that should vanish. */
  readonly balance: number
}

/** Numbers a point that `fieldIn` returns. */
export const FIELD = 7

/**
 * Field in one element at reference points (xi, eta interleaved): x, y, ux, uy, sxx, syy, sxy a point, 7 numbers each.
 */
export function fieldIn(solution: Solution, element: number, reference: Float64Array): Float64Array {
  return fieldSampler(solution)(element, reference)
}

/** The field in any element of one solution at reference points: see `fieldIn`. */
export type Sampler = (element: number, reference: Float64Array) => Float64Array

/** A function like `fieldIn` for many elements of one solution. */
export function fieldSampler(solution: Solution): Sampler {
  const { plate, mesh, order } = solution
  const bulges = bulgesOf(plate, mesh, order)
  const triangle = triangleShape(order)
  const quad = quadShape(order)
  return (element, reference) => {
    const map = elementMap(mesh, bulges, element)
    return fieldOn(solution, map, map.corner.length === 6 ? triangle : quad, element, reference)
  }
}

function fieldOn(solution: Solution, map: ElementMap, { modes, fill }: ElementShape, element: number, reference: Float64Array): Float64Array {
  const { plate } = solution
  const amplitude = amplitudesOf(solution, modes, element)
  const n = modes.count
  const { d11, d12, d33 } = elasticity(plate.nu)
  const value = new Float64Array(n)
  const byXi = new Float64Array(n)
  const byEta = new Float64Array(n)
  const at = new Float64Array(6)
  const points = reference.length / 2
  const field = new Float64Array(FIELD * points)
  for (let q = 0; q < points; q++) {
    fill(reference[2 * q], reference[2 * q + 1], value, byXi, byEta)
    mapPoint(map, reference[2 * q], reference[2 * q + 1], at)
    let [ux, uy, uxXi, uxEta, uyXi, uyEta] = [0, 0, 0, 0, 0, 0]
    for (let i = 0; i < n; i++) {
      const a = amplitude[2 * i]
      const b = amplitude[2 * i + 1]
      ux += value[i] * a
      uy += value[i] * b
      uxXi += byXi[i] * a
      uxEta += byEta[i] * a
      uyXi += byXi[i] * b
      uyEta += byEta[i] * b
    }
    const [x, y, xXi, yXi, xEta, yEta] = at
    const jacobian = xXi * yEta - yXi * xEta
    const exx = (yEta * uxXi - yXi * uxEta) / jacobian
    const eyy = (xXi * uyEta - xEta * uyXi) / jacobian
    const gxy = (xXi * uxEta - xEta * uxXi + yEta * uyXi - yXi * uyEta) / jacobian
    field.set([x, y, ux, uy, d11 * exx + d12 * eyy, d12 * exx + d11 * eyy, d33 * gxy], FIELD * q)
  }
  return field
}

/** Amplitudes (x, y interleaved) of an element's shape functions, in the order of its `ElementShape.fill`. */
function amplitudesOf(
  { mesh, order, coefficient }: Solution, { count, outer, inner }: ElementModes, element: number
): Float64Array {
  const dofs = dofMap(mesh, order)
  const sign = elementSigns(mesh, order, count, element)
  const dof = elementDofs(mesh, dofs, element)
  const amplitude = new Float64Array(2 * count)
  outer.forEach((f, i) => {
    amplitude[2 * f] = sign[i] * coefficient[dof[2 * i]]
    amplitude[2 * f + 1] = sign[i] * coefficient[dof[2 * i + 1]]
  })
  const first = firstInner(dofs, element)
  inner.forEach((f, i) => {
    amplitude[2 * f] = coefficient[first + 2 * i]
    amplitude[2 * f + 1] = coefficient[first + 2 * i + 1]
  })
  return amplitude
}

/**
 * Tangential stress along boundary side b at points s in [-1, 1] (in the boundary's sense, material on the left):
 * E times the strain of the side's own displacement plus nu times the normal traction (plane stress, known traction).
 */
export function edgeStress({ plate, mesh, order, coefficient }: Solution, b: number, s: ArrayLike<number>): Float64Array {
  const { curve, traction } = edgeUnder(plate, mesh, b)
  const { dof, sign } = sideDofs(mesh, dofMap(mesh, order), b)
  const { slope } = sideFunctions(order, s)
  const t0 = mesh.boundary.span[2 * b]
  const t1 = mesh.boundary.span[2 * b + 1]
  const stress = new Float64Array(s.length)
  for (let q = 0; q < s.length; q++) {
    const [dx, dy] = sideTangent(curve, t0, t1, order, s[q])
    let along = 0
    for (let i = 0; i <= order; i++) {
      const n = sign[i] * slope[q * (order + 1) + i]
      along += n * (coefficient[dof[i]] * dx + coefficient[dof[i] + 1] * dy)
    }
    stress[q] = along / (dx * dx + dy * dy)
    if (!traction) continue
    const t = t0 + ((t1 - t0) * (1 + s[q])) / 2
    const normal = outwardNormal(curve, t)
    const [tx, ty] = traction(pointOn(curve, t), normal)
    stress[q] += plate.nu * (tx * normal[0] + ty * normal[1])
  }
  return stress
}

/** Reference points on boundary side b of its element, (xi, eta) interleaved, for s in [-1, 1] in the boundary's sense. */
export function sideReference(mesh: Mesh, b: number, s: ArrayLike<number>): Float64Array {
  const corners = nodesOf(mesh, mesh.boundary.element[b]).length
  const corner = corners === 3 ? [0, 0, 1, 0, 0, 1] : [-1, -1, 1, -1, 1, 1, -1, 1]
  const from = mesh.boundary.local[b]
  const to = (from + 1) % corners
  const reference = new Float64Array(2 * s.length)
  for (let q = 0; q < s.length; q++) {
    for (let axis = 0; axis < 2; axis++) {
      reference[2 * q + axis] = ((1 - s[q]) * corner[2 * from + axis] + (1 + s[q]) * corner[2 * to + axis]) / 2
    }
  }
  return reference
}

/** Stress [sxx, syy, sxy] at a point of the plate (plate units), null outside it. Newton's method on the element's map. */
export function stressAtPoint(
  solution: Solution, x: number, y: number, sample: Sampler = fieldSampler(solution)
): [number, number, number] | null {
  const { plate, mesh } = solution
  const bulges = bulgesOf(plate, mesh, solution.order)
  let best: { element: number; xi: number; eta: number; outside: number } | null = null
  for (let element = 0; element < elementCount(mesh); element++) {
    const map = elementMap(mesh, bulges, element)
    if (!nearBox(map, x, y)) continue
    const found = invertMap(map, x, y)
    if (!found) continue
    const [xi, eta] = found
    const triangular = map.corner.length === 6
    const outside = triangular ? Math.max(-xi, -eta, xi + eta - 1) : Math.max(Math.abs(xi), Math.abs(eta)) - 1
    if (!best || outside < best.outside) best = { element, xi, eta, outside }
  }
  // a point on the edge may fall outside by rounding
  if (!best || best.outside > 1e-9) return null
  const field = sample(best.element, Float64Array.of(best.xi, best.eta))
  return [field[4], field[5], field[6]]
}

/** True when the point lies in the box of the corners, enlarged by its size (a bulge stays within it). */
function nearBox({ corner }: ElementMap, x: number, y: number): boolean {
  const xs = corner.filter((_, i) => i % 2 === 0)
  const ys = corner.filter((_, i) => i % 2 === 1)
  const size = Math.max(Math.max(...xs) - Math.min(...xs), Math.max(...ys) - Math.min(...ys))
  return (
    x >= Math.min(...xs) - size && x <= Math.max(...xs) + size && y >= Math.min(...ys) - size && y <= Math.max(...ys) + size
  )
}

/** The reference point (xi, eta) of a point by Newton's method from the middle, null where that runs away (outside only). */
function invertMap(map: ElementMap, x: number, y: number): [number, number] | null {
  const at = new Float64Array(6)
  const middle = map.corner.length === 6 ? 1 / 3 : 0
  let xi = middle
  let eta = middle
  for (let step = 0; step < 30; step++) {
    mapPoint(map, xi, eta, at)
    const rx = x - at[0]
    const ry = y - at[1]
    const jacobian = at[2] * at[5] - at[3] * at[4]
    if (!(Math.abs(jacobian) > 0)) return null
    const dXi = (at[5] * rx - at[4] * ry) / jacobian
    const dEta = (at[2] * ry - at[3] * rx) / jacobian
    xi += dXi
    eta += dEta
    if (Math.abs(dXi) + Math.abs(dEta) < 1e-14) break
    if (Math.abs(xi) + Math.abs(eta) > 10) return null
  }
  return [xi, eta]
}
