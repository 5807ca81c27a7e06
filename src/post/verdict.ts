// What `verify` gives for a case: the object that `--json` prints. Lengths, forces and stresses are in the case's units.

import type { ElementKind } from '../mesh/mesh.ts'
import type { BarSource } from './bar.ts'

export type LengthUnit = 'mm' | 'cm' | 'm' | 'in'
export type ForceUnit = 'N' | 'kN' | 'lbf' | 'kip'
export type StressUnit = 'Pa' | 'MPa' | 'GPa' | 'psi' | 'ksi'

export interface Verdict {
  /** Version of the program. */
  readonly offchart: string
  readonly case: string
  readonly file: string
  /** True when every raiser's bar is within the tolerance. */
  readonly settled: boolean
  /** Id of the raiser with the largest |peak|, null if no raiser has a finite peak. */
  readonly governing: string | null
  /** By how much the governing |peak| exceeds the next raiser's, relative; null with a single raiser; 0 for a tie. */
  readonly margin: number | null
  readonly tolerance: number
  /** The order that was fixed by hand, null where the accuracy loop chose. */
  readonly fixedOrder: number | null
  readonly units: { readonly length: LengthUnit; readonly force: ForceUnit; readonly stress: StressUnit }
  readonly raisers: readonly RaiserVerdict[]
  readonly checks: Checks
  readonly mesh: MeshFigures
  readonly time: { readonly mesh: number; readonly solve: number; readonly total: number }
  readonly warnings: readonly string[]
}

export interface RaiserVerdict {
  readonly id: string
  readonly kind: 'hole' | 'notch' | 'shoulder' | 'corner'
  readonly kt: Kt | null
  readonly peak: Peak | null
  readonly nominal: Nominal | null
  /** Why `kt` or `peak` is null. */
  readonly why?: string
  readonly chart: null
  readonly history: readonly Step[]
}

/** `error` is the half-width of the bar on `net`; `flexure` is null where the net section is not eccentric. */
export interface Kt {
  readonly net: number
  readonly gross: number
  readonly error: number
  readonly flexure: number | null
}

/** Tangential edge stress of largest magnitude, signed; `error` is the half-width of its bar, `setBy` the evidence that set it. */
export interface Peak {
  readonly stress: number
  readonly error: number
  readonly setBy: BarSource
  readonly at: readonly [number, number]
  readonly where: string
}

/** Nominal stresses, signed; `how` is the formula of the net one with its numbers. */
export interface Nominal {
  readonly net: number
  readonly gross: number
  readonly flexure: number | null
  readonly how: string
}

/** One solve of the accuracy loop as this raiser saw it; `mesh` counts the meshes from 1. */
export interface Step {
  readonly mesh: number
  readonly order: number
  readonly dof: number
  readonly kt: number | null
  readonly peak: number
  /** Stress left over on the free edge at the peak, and step of the edge stress beside it, relative to the peak. */
  readonly freeEdge: number
  readonly step: number
}

export interface Checks {
  readonly balance: number
  readonly residual: number
  readonly freeEdge: number
}

export interface MeshFigures {
  /** The kind of elements that was meshed. */
  readonly elements: ElementKind
  readonly triangles: number
  readonly quads: number
  readonly order: number
  readonly dof: number
  /** Degrees, of any element. */
  readonly smallestAngle: number
  /** Least scaled Jacobian: 1 for equilateral triangles and squares, 0 for a degenerate element. */
  readonly worstShape: number
}
