// From plate to mesh: size field, divided boundary, triangles, and then the numbering of sides.

import type { Plate } from '../case/plate.ts'
import { checkMesh } from './check.ts'
import { divideBoundary, type Segment } from './divide.ts'
import { fillPlate } from './fill.ts'
import type { Mesh } from './mesh.ts'
import { sizeField, type Fineness } from './size.ts'

/**
 * Meshes a plate with triangles, curved along arcs, at a fineness; checked before it is returned.
 * @throws MeshError when the mesh breaks one of its invariants (a bug, not a user's mistake)
 */
export function meshPlate(plate: Plate, fineness: Fineness): Mesh {
  const size = sizeField(plate, fineness)
  const { point, triangle, segments } = fillPlate(plate, divideBoundary(plate, size), size)
  const mesh = numberSides(point, triangle, segments)
  checkMesh(plate, mesh)
  return mesh
}

/** The mesh with every side numbered once, and the boundary's sides in the order of loops, edges and parameters. */
function numberSides(point: Float64Array, triangle: Int32Array, segments: readonly Segment[]): Mesh {
  const nodes = point.length / 2
  const numberOf = new Map<number, number>()
  const side: number[] = []
  const triangleSide = new Int32Array(triangle.length)
  const elementAt: number[] = []
  for (let i = 0; i < triangle.length; i++) {
    const a = triangle[i]
    const b = triangle[i % 3 === 2 ? i - 2 : i + 1]
    const key = Math.min(a, b) * nodes + Math.max(a, b)
    let number = numberOf.get(key)
    if (number === undefined) {
      number = side.push(Math.min(a, b), Math.max(a, b)) / 2 - 1
      numberOf.set(key, number)
      elementAt.push(i)
    }
    triangleSide[i] = number
  }

  const ordered = segments.toSorted((s, t) => s.loop - t.loop || s.edge - t.edge || s.t0 - t.t0)
  const sideBoundary = new Int32Array(side.length / 2).fill(-1)
  const boundarySide = Int32Array.from(ordered, ({ a, b }) => numberOf.get(Math.min(a, b) * nodes + Math.max(a, b))!)
  boundarySide.forEach((number, b) => {
    sideBoundary[number] = b
  })
  return {
    point,
    triangle,
    quad: new Int32Array(0),
    side: Int32Array.from(side),
    triangleSide,
    quadSide: new Int32Array(0),
    sideBoundary,
    boundary: {
      count: ordered.length,
      side: boundarySide,
      element: Int32Array.from(boundarySide, (number) => Math.floor(elementAt[number] / 3)),
      local: Int32Array.from(boundarySide, (number) => elementAt[number] % 3),
      loop: Int32Array.from(ordered, ({ loop }) => loop),
      edge: Int32Array.from(ordered, ({ edge }) => edge),
      span: Float64Array.from(ordered.flatMap(({ t0, t1 }) => [t0, t1]))
    }
  }
}
