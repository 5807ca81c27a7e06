// Plates made by hand for tests of mesh and solver, with any traction that a test wants on their edges.

import { circularArc, type Curve, type Edge, type Part, type Plate, type Point, type Traction } from '../../src/case/plate.ts'

export function edge(curve: Curve, part: Part, raiser: number, traction: Traction | null): Edge {
  return { curve, part, raiser, side: 0, origin: 0, traction, label: part }
}

/** A polygon through the corners (counter-clockwise), one traction a side or one for all. */
export function polygon(corners: readonly Point[], traction: Traction | null): Edge[] {
  return corners.map((from, i) => edge({ kind: 'line', from, to: corners[(i + 1) % corners.length] }, 'side', -1, traction))
}

/** A full circle in quarter arcs, counter-clockwise (sense 1) or clockwise (sense -1). */
export function circle(centre: Point, radius: number, sense: 1 | -1, raiser: number, traction: Traction | null): Edge[] {
  const [x, y] = centre
  const corner: Point[] = [
    [x + radius, y],
    [x, y + sense * radius],
    [x - radius, y],
    [x, y - sense * radius]
  ]
  return corner.map((from, i) => {
    const ends = { from, to: corner[(i + 1) % 4] }
    return edge(circularArc(centre, radius, (sense * i * Math.PI) / 2, (sense * Math.PI) / 2, ends), 'hole', raiser, traction)
  })
}

/** A full ellipse about (0, 0) with semi-axes along x and y, in quarter arcs, clockwise: a hole. */
export function ellipseHole(a: number, b: number, raiser: number): Edge[] {
  const corner: Point[] = [[a, 0], [0, -b], [-a, 0], [0, b]]
  return corner.map((from, i) => {
    const arc = { kind: 'arc' as const, from, to: corner[(i + 1) % 4], centre: [0, 0] as Point, axes: [a, b] as Point, tilt: 0 }
    return edge({ ...arc, start: (-i * Math.PI) / 2, sweep: -Math.PI / 2 }, 'hole', raiser, null)
  })
}

/** A plate of the given loops; every raiser index up to the largest becomes a hole raiser. Units 1, no bar. */
export function plateOf(loops: readonly (readonly Edge[])[], nu = 0.3): Plate {
  const raisers = Math.max(...loops.flat().map(({ raiser }) => raiser)) + 1
  return {
    loops,
    raisers: Array.from({ length: raisers }, (_, r) => ({
      id: `hole-${r + 1}`,
      kind: 'hole' as const,
      sharp: null,
      loop: loops.findIndex((loop) => loop.some((e) => e.raiser === r)),
      box: [0, 0, 0, 0] as const,
      shape: 'circle' as const
    })),
    sharpCorners: [],
    bar: null,
    nu,
    unit: { length: 1, thickness: 1, stress: 1 }
  }
}
