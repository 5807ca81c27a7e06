// The mesh: nodes, elements and their shared sides in flat arrays. Elements are numbered triangles first, then quads.
// Local side k of an element runs from its node k to its node k + 1 (cyclic), counter-clockwise.

import type { Plate } from '../case/plate.ts'

/** Triangles only; quads along the arcs and triangles elsewhere; quads only. */
export const ELEMENT_KINDS = ['triangle', 'mixed', 'quad'] as const
export type ElementKind = (typeof ELEMENT_KINDS)[number]

export interface Mesh {
  /** (x, y) a node, plate units; 2 numbers a node. */
  readonly point: Float64Array
  /** Three nodes a triangle, counter-clockwise. */
  readonly triangle: Int32Array
  /** Four nodes a quad, counter-clockwise. */
  readonly quad: Int32Array
  /** Two nodes a side, the lower number first; each side of the mesh stands here once. */
  readonly side: Int32Array
  /** Three sides a triangle. */
  readonly triangleSide: Int32Array
  /** Four sides a quad. */
  readonly quadSide: Int32Array
  /** Boundary sides; each lies on one edge of the plate. */
  readonly boundary: BoundarySides
  /** For each side its index among the boundary sides, -1 inside. */
  readonly sideBoundary: Int32Array
}

/** Boundary sides, `count` of them, in the order of the plate's loops, edges and parameter t. */
export interface BoundarySides {
  readonly count: number
  /** The side, an index into `Mesh.side`. */
  readonly side: Int32Array
  /** The element that it bounds. */
  readonly element: Int32Array
  /** Which local side of that element it is. */
  readonly local: Int32Array
  /** The plate's edge: loop and position in it. */
  readonly loop: Int32Array
  readonly edge: Int32Array
  /** Two numbers a side: parameters t0 < t1 on the edge's curve; the element has its material on the left. */
  readonly span: Float64Array
}

export function nodeCount(mesh: Mesh): number {
  return mesh.point.length / 2
}

export function sideCount(mesh: Mesh): number {
  return mesh.side.length / 2
}

export function triangleCount(mesh: Mesh): number {
  return mesh.triangle.length / 3
}

export function quadCount(mesh: Mesh): number {
  return mesh.quad.length / 4
}

export function elementCount(mesh: Mesh): number {
  return triangleCount(mesh) + quadCount(mesh)
}

/** Three or four nodes of an element (triangles first, then quads), counter-clockwise; a view into the mesh. */
export function nodesOf(mesh: Mesh, element: number): Int32Array {
  const quad = element - triangleCount(mesh)
  return quad < 0 ? mesh.triangle.subarray(3 * element, 3 * element + 3) : mesh.quad.subarray(4 * quad, 4 * quad + 4)
}

/** Three or four sides of an element; side k runs from node k to node k + 1. A view into the mesh. */
export function sidesOf(mesh: Mesh, element: number): Int32Array {
  const quad = element - triangleCount(mesh)
  return quad < 0 ? mesh.triangleSide.subarray(3 * element, 3 * element + 3) : mesh.quadSide.subarray(4 * quad, 4 * quad + 4)
}

/** The edge of the plate under boundary side b. */
export function edgeUnder(plate: Plate, mesh: Mesh, b: number) {
  return plate.loops[mesh.boundary.loop[b]][mesh.boundary.edge[b]]
}
