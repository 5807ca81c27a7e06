// `npm run study:plates -- [how many]`: random plates from seeds 1, 2, … (400 by default), each meshed with all kinds of elements,
// checked, and solved at order 6; and plates with more and more holes. It is no test: it prints what it found.

import { buildPlate } from '../../src/case/build.ts'
import type { Plate } from '../../src/case/plate.ts'
import { CaseError, formatProblems } from '../../src/case/problem.ts'
import { readCase } from '../../src/case/read.ts'
import { meshPlate } from '../../src/mesh/build.ts'
import { checkMesh } from '../../src/mesh/check.ts'
import { ELEMENT_KINDS, elementCount } from '../../src/mesh/mesh.ts'
import { dofMap } from '../../src/solve/dofs.ts'
import { solvePlate } from '../../src/solve/solve.ts'
import { randomCase } from '../support/random.ts'

const ORDER = 6
const plateOf = (fields: object, name: string): Plate => buildPlate(readCase(JSON.stringify(fields), name))
const even = (plate: Plate) => ({ raiser: plate.raisers.map(() => 0), all: 0 })

function studyRandomPlates(count: number): void {
  const worst = Object.fromEntries(ELEMENT_KINDS.map((kind) => [kind, { angle: 180, shape: 1, elements: 0 }]))
  let refused = 0
  let [residual, balance, solved] = [0, 0, 0]
  for (let seed = 1; seed <= count; seed++) {
    let plate: Plate
    try {
      plate = plateOf(randomCase(seed), `seed ${seed}`)
    } catch (error) {
      if (!(error instanceof CaseError)) throw error
      refused++
      console.log(`refused: ${formatProblems(error)}`)
      continue
    }
    for (const kind of ELEMENT_KINDS) {
      const mesh = meshPlate(plate, even(plate), kind)
      const { smallestAngle, worstShape } = checkMesh(plate, mesh)
      const own = worst[kind]
      own.angle = Math.min(own.angle, smallestAngle)
      own.shape = Math.min(own.shape, worstShape)
      own.elements += elementCount(mesh)
      if (kind !== 'mixed') continue
      const solution = solvePlate(plate, mesh, ORDER)
      solved++
      residual = Math.max(residual, solution.residual)
      balance = Math.max(balance, solution.balance)
    }
    if (process.stderr.isTTY) process.stderr.write(`\r${seed} of ${count}`)
  }
  console.log(`\n${count} random plates: ${refused} refused; all others meshed with each kind of elements and passed the check`)
  console.log('| elements | mean count | smallest angle | worst shape |\n| --- | ---: | ---: | ---: |')
  for (const kind of ELEMENT_KINDS) {
    const { angle, shape, elements } = worst[kind]
    console.log(`| ${kind} | ${(elements / (count - refused)).toFixed(0)} | ${angle.toFixed(1)}° | ${shape.toFixed(2)} |`)
  }
  console.log(`solved ${solved} at order ${ORDER}: residual at most ${residual.toExponential(1)}, unbalanced at most ${balance.toExponential(1)}`)
}

/** Rows of five holes, as many as are asked for. */
function manyHoles(count: number): Plate {
  const columns = Math.ceil(count / 5)
  const holes = Array.from({ length: count }, (_, i) => ({ shape: 'circle', diameter: 8, at: [30 + 20 * Math.floor(i / 5), -40 + 20 * (i % 5)] }))
  const sections = [{ width: 100, length: 20 * columns + 40 }]
  return plateOf({ name: `${count} holes`, thickness: 5, plate: { sections }, holes, load: { axial: 1000 } }, `${count} holes`)
}

function studyManyHoles(): void {
  console.log('\n| holes | elements | unknowns | mesh, ms | solve, ms | ms a hole | peak memory, MB |\n| ---: | ---: | ---: | ---: | ---: | ---: | ---: |')
  for (const count of [10, 10, 30, 100, 300]) {
    const plate = manyHoles(count)
    const start = performance.now()
    const mesh = meshPlate(plate, even(plate), 'mixed')
    const meshed = performance.now()
    solvePlate(plate, mesh, 5)
    const solved = performance.now()
    const memory = process.resourceUsage().maxRSS / 1024
    const cells = [count, elementCount(mesh), dofMap(mesh, 5).all, meshed - start, solved - meshed, (solved - start) / count, memory]
    console.log(`| ${cells.map((cell, k) => cell.toFixed(k === 5 ? 1 : 0)).join(' | ')} |`)
  }
}

studyRandomPlates(Number(process.argv[2] ?? 400))
studyManyHoles()
