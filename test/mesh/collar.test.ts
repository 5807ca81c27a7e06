import { describe, expect, it } from 'vitest'
import { derivativeOn, pointOn, type Plate } from '../../src/case/plate.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { checkMesh } from '../../src/mesh/check.ts'
import { planCollar } from '../../src/mesh/collar.ts'
import { divideBoundary } from '../../src/mesh/divide.ts'
import { edgeUnder, nodesOf, quadCount, triangleCount, type Mesh } from '../../src/mesh/mesh.ts'
import { LAYERS } from '../../src/mesh/rail.ts'
import { sizeField } from '../../src/mesh/size.ts'
import { plateFrom } from '../support/case.ts'
import { expectNear } from '../support/near.ts'

const bar = (fields: object) => plateFrom({ thickness: 5, load: { axial: 1000 }, plate: { sections: [{ width: 50, length: 200 }] }, ...fields }).plate

const stepped = (fillet: number) =>
  bar({ plate: { sections: [{ width: 60, length: 100 }, { width: 40, length: 100 }], fillets: [fillet] } })

const plates: Record<string, Plate> = {
  'round hole': bar({ holes: [{ shape: 'circle', diameter: 15, at: [100, 3] }] }),
  'U notches': bar({ notches: [{ side: 'both', x: 100, depth: 10, radius: 4 }] }),
  'V notch': bar({ notches: [{ side: 'top', x: 100, depth: 12, radius: 2, angle: 60 }] }),
  'semicircular notch': bar({ notches: [{ side: 'top', x: 100, depth: 8, radius: 8 }] }),
  'nearly semicircular notch': bar({ notches: [{ side: 'top', x: 100, depth: 7.9, radius: 8 }] }),
  'notch a little deeper than its radius': bar({ notches: [{ side: 'bottom', x: 100, depth: 8.1, radius: 8 }] }),
  'shallow notch': bar({ notches: [{ side: 'bottom', x: 100, depth: 1, radius: 20 }] }),
  'fillet smaller than the step': stepped(6),
  'fillet as large as the step': stepped(10),
  'fillet a little smaller than the step': stepped(9.9),
  'fillet larger than the step': stepped(25),
  'thin ligament': bar({ holes: [{ shape: 'circle', diameter: 20, at: [100, 14.5] }] }),
  'two holes, 2 % apart': bar({ holes: [{ shape: 'circle', diameter: 10, at: [94.9, 0] }, { shape: 'circle', diameter: 10, at: [105.1, 0] }] })
}

const meshed = (plate: Plate, kind: 'triangle' | 'mixed' | 'quad', halvings = 0) =>
  meshPlate(plate, { raiser: plate.raisers.map(() => halvings), all: 0 }, kind)

/** Boundary sides on arcs, and which of them bound a quad. */
function arcSides(plate: Plate, mesh: Mesh) {
  const sides = Array.from({ length: mesh.boundary.count }, (_, b) => b).filter((b) => edgeUnder(plate, mesh, b).curve.kind === 'arc')
  return { sides, onQuads: sides.filter((b) => nodesOf(mesh, mesh.boundary.element[b]).length === 4) }
}

describe.each(Object.entries(plates))('collar: %s', (_, plate) => {
  it('covers every arc with quads and passes the check, coarse and refined', () => {
    for (const halvings of [0, 1, 2]) {
      const mesh = meshed(plate, 'mixed', halvings)
      checkMesh(plate, mesh)
      const { sides, onQuads } = arcSides(plate, mesh)
      // a side next to the end of a strip may bound the last taper
      expect(onQuads.length).toBeGreaterThanOrEqual(sides.length - 2)
    }
  })

  it('is left out where only triangles are wanted, and all there is where only quads are', () => {
    const triangles = meshed(plate, 'triangle')
    checkMesh(plate, triangles)
    expect(quadCount(triangles)).toBe(0)
    const quads = meshed(plate, 'quad')
    checkMesh(plate, quads)
    expect(triangleCount(quads)).toBe(0)
  })

  it('has heads inside the material, no more than a third of the way across', () => {
    const divided = divideBoundary(plate, sizeField(plate, { raiser: plate.raisers.map(() => 0), all: 0 }))
    const { columns, point } = planCollar(plate, divided)
    for (const { left, loop, edge, t0 } of columns) {
      const [x, y] = [point[2 * left[0]], point[2 * left[0] + 1]]
      const top = left[left.length - 1]
      const height = Math.hypot(point[2 * top] - x, point[2 * top + 1] - y)
      const { curve } = plate.loops[loop][edge]
      const [dx, dy] = derivativeOn(curve, t0)
      const inward = ((point[2 * top + 1] - y) * dx - (point[2 * top] - x) * dy) / Math.hypot(dx, dy)
      expect(inward).toBeGreaterThan(0.8 * height)
      expect(height).toBeLessThanOrEqual(farAcross(plate, loop, edge, t0) / 3 + 1e-12)
    }
  })
})

/** Distance along the normal from a point of an edge to the next edge that it hits. */
function farAcross(plate: Plate, loop: number, edge: number, t: number): number {
  const { curve } = plate.loops[loop][edge]
  const [x, y] = pointOn(curve, t)
  const [dx, dy] = derivativeOn(curve, t)
  const speed = Math.hypot(dx, dy)
  const [nx, ny] = [-dy / speed, dx / speed]
  let nearest = Infinity
  for (const other of plate.loops.flat()) {
    for (let i = 0; i < 400; i++) {
      const [ax, ay] = pointOn(other.curve, i / 400)
      const [bx, by] = pointOn(other.curve, (i + 1) / 400)
      const cross = nx * (by - ay) - ny * (bx - ax)
      if (Math.abs(cross) < 1e-15) continue
      const away = ((ax - x) * (by - ay) - (ay - y) * (bx - ax)) / cross
      const along = ((ax - x) * ny - (ay - y) * nx) / cross
      if (away > 1e-6 && along >= 0 && along <= 1) nearest = Math.min(nearest, away)
    }
  }
  return nearest
}

describe('layers', () => {
  it('are graded toward the edge: nodes of a column stand at the layers\' shares of its thickness', () => {
    const plate = plates['round hole']
    const { columns, point } = planCollar(plate, divideBoundary(plate, sizeField(plate, { raiser: [0], all: 0 })))
    expect(LAYERS[0]).toBeLessThan(0.5)
    for (const { left } of columns) {
      const height = (k: number) => Math.hypot(point[2 * left[k]] - point[2 * left[0]], point[2 * left[k] + 1] - point[2 * left[0] + 1])
      LAYERS.forEach((share, k) => expectNear(height(k + 1), share * height(LAYERS.length), { rel: 1e-12, because: 'one pattern for all' }))
    }
  })

  it('end in full on the neighbouring edge where a semicircular notch or a full fillet meets it', () => {
    for (const name of ['semicircular notch', 'fillet as large as the step']) {
      const plate = plates[name]
      const { covered } = planCollar(plate, divideBoundary(plate, sizeField(plate, { raiser: [0], all: 0 })))
      const lying = covered.filter(({ loop, edge }) => plate.loops[loop][edge].curve.kind === 'line')
      expect(lying.length, name).toBeGreaterThanOrEqual(2 * LAYERS.length)
    }
  })

  it('thin to a third of a ligament of 2 % of the hole', () => {
    const plate = bar({ holes: [{ shape: 'circle', diameter: 20, at: [100, 14.6] }] })
    const mesh = meshed(plate, 'mixed')
    const { sides, onQuads } = arcSides(plate, mesh)
    expect(onQuads.length).toBe(sides.length)
  })
})
