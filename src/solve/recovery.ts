// Stress of elements of order 1 and 2, recovered: superconvergent patch recovery, O.C. Zienkiewicz, J.Z. Zhu, Int. J. Numer. Meth.
// Eng. 33 (1992) 1331. Around every inner vertex a polynomial of the element's own order is fitted, by least squares, to the
// stress at the points of its elements where it is most accurate; its value at the vertex is the recovered stress there. A
// vertex on the boundary takes the mean of its inner neighbours' polynomials. In between the element's shape functions interpolate.
// Cost: one small fit a vertex.

import { Matrix, QrDecomposition } from 'ml-matrix'
import { bulgesOf, elementMap, mapPoint } from '../mesh/map.ts'
import { elementCount, nodeCount, nodesOf, sidesOf, type Mesh } from '../mesh/mesh.ts'
import { FIELD, fieldSampler, type Sampler, type Solution } from './field.ts'

/** Orders whose stress is recovered; higher ones have it accurate everywhere. */
export const RECOVERED_UP_TO = 2

/** The sampler that a reader should see: recovered stress up to order 2, the elements' own above. */
export function reportedSampler(solution: Solution): Sampler {
  return solution.order <= RECOVERED_UP_TO ? recoveredSampler(solution) : fieldSampler(solution)
}

/** Like `fieldSampler`, with the stress of patch recovery; for solutions of order 1 or 2. */
export function recoveredSampler(solution: Solution): Sampler {
  const { mesh, order } = solution
  const raw = fieldSampler(solution)
  const nodal = recoverAtNodes(solution, raw)
  return (element, reference) => {
    const field = raw(element, reference)
    const nodes = nodesOf(mesh, element)
    const sides = sidesOf(mesh, element)
    const corners = nodes.length
    for (let q = 0; q < reference.length / 2; q++) {
      const weight = corners === 3 ? triangleWeights(reference[2 * q], reference[2 * q + 1]) : quadWeights(reference[2 * q], reference[2 * q + 1])
      for (let c = 0; c < 3; c++) {
        let stress = 0
        for (let k = 0; k < corners; k++) {
          const [a, b] = [nodal.vertex[3 * nodes[k] + c], nodal.vertex[3 * nodes[(k + 1) % corners] + c]]
          stress += weight.vertex[k] * a
          if (order === 2) stress += weight.side[k] * (nodal.side[3 * sides[k] + c] - (a + b) / 2)
        }
        field[FIELD * q + 4 + c] = stress
      }
    }
    return field
  }
}

/** Linear weights of the vertices and humps, 1 at the middle, of the sides. */
interface Weights {
  readonly vertex: readonly number[]
  readonly side: readonly number[]
}

function triangleWeights(xi: number, eta: number): Weights {
  const l = [1 - xi - eta, xi, eta]
  return { vertex: l, side: [4 * l[0] * l[1], 4 * l[1] * l[2], 4 * l[2] * l[0]] }
}

function quadWeights(xi: number, eta: number): Weights {
  const [a, b, c, d] = [(1 - xi) / 2, (1 + xi) / 2, (1 - eta) / 2, (1 + eta) / 2]
  const [alongXi, alongEta] = [1 - xi * xi, 1 - eta * eta]
  return { vertex: [a * c, b * c, b * d, a * d], side: [alongXi * c, alongEta * b, alongXi * d, alongEta * a] }
}

/** Recovered stress [sxx, syy, sxy] at every vertex and, for order 2, at the middle of every side. */
interface NodalStress {
  readonly vertex: Float64Array
  readonly side: Float64Array
}

/** Stress as a polynomial around a place: coefficients of `terms`, three a term. */
interface Patch {
  readonly x: number
  readonly y: number
  readonly size: number
  readonly coefficient: Matrix
}

/** Reference points of the most accurate stress: the centre at order 1, the Gauss points of one order less at order 2. */
const G = 1 / Math.sqrt(3)
const POINTS = {
  triangle: [Float64Array.of(1 / 3, 1 / 3), Float64Array.of(1 / 6, 1 / 6, 2 / 3, 1 / 6, 1 / 6, 2 / 3)],
  quad: [Float64Array.of(0, 0), Float64Array.of(-G, -G, G, -G, G, G, -G, G)]
}

function terms(order: number, x: number, y: number): number[] {
  return order === 1 ? [1, x, y] : [1, x, y, x * x, x * y, y * y]
}

function recoverAtNodes(solution: Solution, raw: Sampler): NodalStress {
  const { mesh, order } = solution
  const samples = Array.from({ length: elementCount(mesh) }, (_, e) => {
    const kind = nodesOf(mesh, e).length === 3 ? POINTS.triangle : POINTS.quad
    return raw(e, kind[order - 1])
  })
  const around = elementsAround(mesh)
  const isInner = innerVertices(mesh)
  const patches = around.map((elements, v) => (isInner[v] ? fitPatch(mesh, v, elements, samples, order) : null))
  // a vertex on the boundary uses its inner neighbours' polynomials, or its own where it has none
  const used = around.map((elements, v): Patch[] => {
    const own = patches[v]
    if (own) return [own]
    const near = new Set(elements.flatMap((e) => [...nodesOf(mesh, e)]))
    const fitted = [...near].flatMap((w) => patches[w] ?? [])
    return fitted.length > 0 ? fitted : [fitPatch(mesh, v, elements, samples, order)]
  })
  const vertex = new Float64Array(3 * nodeCount(mesh))
  for (let v = 0; v < nodeCount(mesh); v++) {
    vertex.set(meanOf(used[v], order, mesh.point[2 * v], mesh.point[2 * v + 1]), 3 * v)
  }
  const side = new Float64Array(order === 2 ? (3 * mesh.side.length) / 2 : 0)
  if (order === 2) {
    const middle = sideMiddles(solution)
    for (let s = 0; s < side.length / 3; s++) {
      const patchesHere = [...used[mesh.side[2 * s]], ...used[mesh.side[2 * s + 1]]]
      side.set(meanOf(patchesHere, order, middle[2 * s], middle[2 * s + 1]), 3 * s)
    }
  }
  return { vertex, side }
}

function elementsAround(mesh: Mesh): number[][] {
  const around: number[][] = Array.from({ length: nodeCount(mesh) }, () => [])
  for (let e = 0; e < elementCount(mesh); e++) for (const node of nodesOf(mesh, e)) around[node].push(e)
  return around
}

/** 1 for vertices inside, 0 for those on the boundary. */
function innerVertices(mesh: Mesh): Uint8Array {
  const inner = new Uint8Array(nodeCount(mesh)).fill(1)
  for (const side of mesh.boundary.side) {
    inner[mesh.side[2 * side]] = 0
    inner[mesh.side[2 * side + 1]] = 0
  }
  return inner
}

/** Least-squares polynomial through the samples of some elements; of a lower degree where they don't determine one. */
function fitPatch(mesh: Mesh, v: number, elements: readonly number[], samples: readonly Float64Array[], order: number): Patch {
  const [x, y] = [mesh.point[2 * v], mesh.point[2 * v + 1]]
  const rows = elements.flatMap((e) => Array.from({ length: samples[e].length / FIELD }, (_, q) => samples[e].subarray(FIELD * q, FIELD * q + FIELD)))
  const size = Math.max(...rows.map((row) => Math.hypot(row[0] - x, row[1] - y)))
  const right = new Matrix(rows.map((row) => [row[4], row[5], row[6]]))
  for (let degree = order; degree >= 1; degree--) {
    const left = new Matrix(rows.map((row) => terms(degree, (row[0] - x) / size, (row[1] - y) / size)))
    if (left.rows < left.columns) continue
    const qr = new QrDecomposition(left)
    if (qr.isFullRank() && wellPosed(qr)) return { x, y, size, coefficient: qr.solve(right) }
  }
  return { x, y, size, coefficient: new Matrix([right.mean('column')]) }
}

/** Diagonal of R below which a fit would extrapolate wildly. */
function wellPosed(qr: QrDecomposition): boolean {
  const diagonal = qr.upperTriangularMatrix.diagonal().map(Math.abs)
  return Math.min(...diagonal) > 1e-3 * Math.max(...diagonal)
}

function meanOf(patches: readonly Patch[], order: number, px: number, py: number): number[] {
  const mean = [0, 0, 0]
  for (const { x, y, size, coefficient } of patches) {
    const values = terms(order, (px - x) / size, (py - y) / size)
    for (let c = 0; c < 3; c++) {
      for (let i = 0; i < coefficient.rows; i++) mean[c] += (values[i] * coefficient.get(i, c)) / patches.length
    }
  }
  return mean
}

/** (x, y) of the middle of every side as the elements have it. */
function sideMiddles({ plate, mesh, order }: Solution): Float64Array {
  const middle = new Float64Array(mesh.side.length)
  const bulges = bulgesOf(plate, mesh, order)
  const out = new Float64Array(6)
  const corner = { 3: [0, 0, 1, 0, 0, 1], 4: [-1, -1, 1, -1, 1, 1, -1, 1] }
  for (let e = 0; e < elementCount(mesh); e++) {
    const map = elementMap(mesh, bulges, e)
    const sides = sidesOf(mesh, e)
    const at = corner[sides.length as 3 | 4]
    sides.forEach((side, k) => {
      const b = (k + 1) % sides.length
      mapPoint(map, (at[2 * k] + at[2 * b]) / 2, (at[2 * k + 1] + at[2 * b + 1]) / 2, out)
      middle.set(out.subarray(0, 2), 2 * side)
    })
  }
  return middle
}
