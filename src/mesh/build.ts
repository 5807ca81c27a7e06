// From plate to mesh: size field, divided boundary, quads along the arcs, triangles in what is left.

import type { Plate } from '../case/plate.ts'
import { checkMesh } from './check.ts'
import { bareCollar, planCollar } from './collar.ts'
import { divideBoundary } from './divide.ts'
import { fillPlate } from './fill.ts'
import type { ElementKind, Mesh } from './mesh.ts'
import { numberSides } from './number.ts'
import { sizeField, type Fineness } from './size.ts'
import { smoothNodes } from './smooth.ts'
import { splitIntoQuads } from './split.ts'
import { frontOf, layStrips } from './strip.ts'

/**
 * Meshes a plate at a fineness; checked before it is returned. Elements are curved along arcs.
 * @throws MeshError when the mesh breaks one of its invariants (a bug, not a user's mistake)
 */
export function meshPlate(plate: Plate, fineness: Fineness, kind: ElementKind): Mesh {
  // quads come from halving every side of a mesh that is twice as coarse
  const size = sizeField(plate, kind === 'quad' ? { ...fineness, all: fineness.all - 1 } : fineness)
  const divided = divideBoundary(plate, size)
  const collar = kind === 'triangle' ? bareCollar(divided) : planCollar(plate, divided)
  const { boundary, vertex } = frontOf(collar)
  const filling = fillPlate(plate, boundary, size)
  const smooth = smoothNodes(plate, { ...filling, element: filling.triangle, corners: 3 })
  const laid = layStrips(plate, collar, vertex, { ...filling, point: smooth })
  const elements = kind === 'quad' ? splitIntoQuads(plate, laid) : laid
  const mesh = numberSides(elements.point, elements.triangle, elements.quad, elements.segments)
  checkMesh(plate, mesh)
  return mesh
}
