import { describe, expect, it } from 'vitest'
import { buildPlate } from '../../src/case/build.ts'
import { readCase } from '../../src/case/read.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { checkMesh } from '../../src/mesh/check.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { randomCase } from '../support/random.ts'

const plates = Array.from({ length: 60 }, (_, i) => i + 1).map((seed) => ({
  seed,
  plate: buildPlate(readCase(JSON.stringify(randomCase(seed)), `seed ${seed}`))
}))

describe('60 random plates', () => {
  it.each(['triangle', 'mixed', 'quad'] as const)('mesh into %s elements that pass the check', (kind) => {
    for (const { seed, plate } of plates) {
      const mesh = meshPlate(plate, { raiser: plate.raisers.map(() => 0), all: 0 }, kind)
      const { smallestAngle, worstShape } = checkMesh(plate, mesh)
      // triangles of the fill have 25 degrees; a taper that was halved, or a triangle divided into quads, has less
      expect(smallestAngle, `seed ${seed}`).toBeGreaterThan({ triangle: 24.9, mixed: 17, quad: 17 }[kind])
      expect(worstShape, `seed ${seed}`).toBeGreaterThan(0.1)
    }
  })

  // exactly curved elements turn with an error that is 1e-8 at order 3 and rounding from order 6 on (mesh/map.ts)
  it.each([[2, 60], [6, 15]])('are solved with residual and balance at rounding: order %i, %i of them', (order, count) => {
    for (const { seed, plate } of plates.slice(0, count)) {
      const mesh = meshPlate(plate, { raiser: plate.raisers.map(() => 0), all: 0 }, 'mixed')
      const { residual, balance } = solvePlate(plate, mesh, order)
      expect(residual, `seed ${seed}`).toBeLessThan(1e-14)
      // a bar 50 times as long as wide carries rounding over that lever
      expect(balance, `seed ${seed}`).toBeLessThan(2e-11)
    }
  })
})
