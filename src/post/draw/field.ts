// The stress of every pixel: each element is cut into small triangles in its reference shape, the field is evaluated once
// at each of their corners and goes straight between them. The corners lie where the element's exact map puts them, so
// curved edges come out curved. What is interpolated is the stress; colours come later.

import { FIELD } from '../../solve/field.ts'
import { elementCount, type Mesh, nodesOf } from '../../mesh/mesh.ts'
import type { StressState } from '../principal.ts'
import type { Coverage } from './coverage.ts'
import type { View } from './view.ts'

/** x, y, ux, uy, sxx, syy, sxy (plate units) at each reference point of an element; see `fieldIn`. */
export type Sampler = (element: number, reference: Float64Array) => Float64Array

export interface FieldPlan {
  readonly mesh: Mesh
  readonly order: number
  readonly sample: Sampler
  /** What is painted, from a stress state in plate units. */
  readonly quantity: (stress: StressState) => number
  readonly view: View
  /** Pixels. */
  readonly width: number
  readonly height: number
}

/** A number a pixel, row by row, `width` times `height`; NaN where no element covers the pixel's centre. */
export interface PaintedField {
  readonly width: number
  readonly height: number
  readonly amount: Float32Array
  /** Least and greatest among the corners of the small triangles. */
  readonly low: number
  readonly high: number
}

/** Size wanted of the small triangles, pixels. */
const FACET = 3

/** Paints the whole mesh. */
export function paintField(plan: FieldPlan): PaintedField {
  const { mesh, order, sample, quantity, view, width, height } = plan
  const amount = new Float32Array(width * height).fill(NaN)
  const lattices = new Map<string, Lattice>()
  let low = Infinity
  let high = -Infinity
  for (let element = 0; element < elementCount(mesh); element++) {
    const nodes = nodesOf(mesh, element)
    const size = longestSide(mesh, nodes) * view.scale
    // fine enough for the pixels and for the order, but never below a pixel
    const parts = Math.max(1, Math.ceil(size / FACET), Math.min(order + 2, Math.ceil(size)))
    const key = `${nodes.length}/${parts}`
    const lattice = lattices.get(key) ?? (nodes.length === 3 ? triangleLattice(parts) : quadLattice(parts))
    lattices.set(key, lattice)

    const field = sample(element, lattice.reference)
    const count = lattice.reference.length / 2
    const px = new Float64Array(count)
    const py = new Float64Array(count)
    const value = new Float64Array(count)
    for (let i = 0; i < count; i++) {
      px[i] = view.x0 + view.scale * field[FIELD * i]
      py[i] = view.y0 - view.scale * field[FIELD * i + 1]
      value[i] = quantity([field[FIELD * i + 4], field[FIELD * i + 5], field[FIELD * i + 6]])
      low = Math.min(low, value[i])
      high = Math.max(high, value[i])
    }
    const { facet } = lattice
    for (let f = 0; f < facet.length; f += 3) {
      paintFacet(amount, width, height, px, py, value, facet[f], facet[f + 1], facet[f + 2])
    }
  }
  return { width, height, amount, low, high }
}

/**
 * Gives a number, in place, to the pixels that a coverage touches but no element reached (their centre lies just outside
 * the plate): the mean of their painted neighbours, ring by ring.
 */
export function extendField({ width, height, amount }: PaintedField, coverage: Coverage): void {
  let open: number[] = []
  for (let row = 0; row < coverage.height; row++) {
    for (let column = 0; column < coverage.width; column++) {
      const x = coverage.x + column
      const y = coverage.y + row
      if (x < 0 || y < 0 || x >= width || y >= height) continue
      if (coverage.amount[row * coverage.width + column] > 0 && Number.isNaN(amount[y * width + x])) open.push(y * width + x)
    }
  }
  while (open.length > 0) {
    const found = open.map((pixel) => meanAround(amount, width, height, pixel))
    open.forEach((pixel, i) => {
      amount[pixel] = found[i]
    })
    const left = open.filter((pixel) => Number.isNaN(amount[pixel]))
    if (left.length === open.length) return
    open = left
  }
}

function meanAround(amount: Float32Array, width: number, height: number, pixel: number): number {
  const x = pixel % width
  const y = (pixel - x) / width
  let sum = 0
  let count = 0
  for (let row = Math.max(0, y - 1); row <= Math.min(height - 1, y + 1); row++) {
    for (let column = Math.max(0, x - 1); column <= Math.min(width - 1, x + 1); column++) {
      const near = amount[row * width + column]
      if (Number.isNaN(near)) continue
      sum += near
      count++
    }
  }
  return count > 0 ? sum / count : NaN
}

/** Points of a reference element, (xi, eta) each, and the small triangles between them, three indices each. */
interface Lattice {
  readonly reference: Float64Array
  readonly facet: Int32Array
}

/** The reference triangle in n^2 facets. */
function triangleLattice(n: number): Lattice {
  const reference: number[] = []
  const facet: number[] = []
  // row j holds n + 1 - j points
  const at = (i: number, j: number) => j * (n + 1) - (j * (j - 1)) / 2 + i
  for (let j = 0; j <= n; j++) {
    for (let i = 0; i <= n - j; i++) {
      reference.push(i / n, j / n)
      if (i + j < n) facet.push(at(i, j), at(i + 1, j), at(i, j + 1))
      if (i + j < n - 1) facet.push(at(i + 1, j), at(i + 1, j + 1), at(i, j + 1))
    }
  }
  return { reference: Float64Array.from(reference), facet: Int32Array.from(facet) }
}

/** The reference square in 2 n^2 facets. */
function quadLattice(n: number): Lattice {
  const reference: number[] = []
  const facet: number[] = []
  const at = (i: number, j: number) => j * (n + 1) + i
  for (let j = 0; j <= n; j++) {
    for (let i = 0; i <= n; i++) {
      reference.push((2 * i) / n - 1, (2 * j) / n - 1)
      if (i === n || j === n) continue
      facet.push(at(i, j), at(i + 1, j), at(i + 1, j + 1), at(i, j), at(i + 1, j + 1), at(i, j + 1))
    }
  }
  return { reference: Float64Array.from(reference), facet: Int32Array.from(facet) }
}

/** Longest straight distance between neighbouring nodes, plate units. */
function longestSide({ point }: Mesh, nodes: Int32Array): number {
  let longest = 0
  nodes.forEach((p, i) => {
    const q = nodes[(i + 1) % nodes.length]
    longest = Math.max(longest, Math.hypot(point[2 * q] - point[2 * p], point[2 * q + 1] - point[2 * p + 1]))
  })
  return longest
}

/** Paints one small triangle, in place: pixels whose centre it holds, its sides included so that no seam stays open. */
function paintFacet(
  amount: Float32Array, width: number, height: number,
  px: Float64Array, py: Float64Array, value: Float64Array, a: number, b: number, c: number
): void {
  const ux = px[b] - px[a]
  const uy = py[b] - py[a]
  const vx = px[c] - px[a]
  const vy = py[c] - py[a]
  const twice = ux * vy - uy * vx
  if (twice === 0) return
  const ub = value[b] - value[a]
  const uc = value[c] - value[a]
  // the pixel's centre is half a pixel from its corner
  const left = Math.max(0, Math.ceil(Math.min(px[a], px[b], px[c]) - 0.5))
  const right = Math.min(width - 1, Math.floor(Math.max(px[a], px[b], px[c]) - 0.5))
  const top = Math.max(0, Math.ceil(Math.min(py[a], py[b], py[c]) - 0.5))
  const bottom = Math.min(height - 1, Math.floor(Math.max(py[a], py[b], py[c]) - 0.5))
  for (let y = top; y <= bottom; y++) {
    const ry = y + 0.5 - py[a]
    for (let x = left; x <= right; x++) {
      const rx = x + 0.5 - px[a]
      const toB = (rx * vy - ry * vx) / twice
      const toC = (ux * ry - uy * rx) / twice
      if (toB < -SEAM || toC < -SEAM || toB + toC > 1 + SEAM) continue
      amount[y * width + x] = value[a] + toB * ub + toC * uc
    }
  }
}

/** Share of a facet by which it reaches over its sides: far below a pixel, far above rounding. */
const SEAM = 1e-7
