// From plate to mesh: size field, divided boundary, triangles.

import type { Plate } from '../case/plate.ts'
import { checkMesh } from './check.ts'
import { divideBoundary } from './divide.ts'
import { fillPlate } from './fill.ts'
import type { Mesh } from './mesh.ts'
import { numberSides } from './number.ts'
import { sizeField, type Fineness } from './size.ts'

/**
 * Meshes a plate with triangles, curved along arcs, at a fineness; checked before it is returned.
 * @throws MeshError when the mesh breaks one of its invariants (a bug, not a user's mistake)
 */
export function meshPlate(plate: Plate, fineness: Fineness): Mesh {
  const size = sizeField(plate, fineness)
  const { point, triangle, segments } = fillPlate(plate, divideBoundary(plate, size), size)
  const mesh = numberSides(point, triangle, new Int32Array(0), segments)
  checkMesh(plate, mesh)
  return mesh
}
