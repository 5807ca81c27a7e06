import { PNG } from 'pngjs'
import { describe, expect, it } from 'vitest'
import type { PlateCase } from '../../../src/case/schema.ts'
import { meshPlate } from '../../../src/mesh/build.ts'
import { type FigureSubject, renderFigure } from '../../../src/post/draw/figure.ts'
import { colourOfStress, makeScale } from '../../../src/post/draw/scale.ts'
import type { RaiserVerdict, Verdict } from '../../../src/post/verdict.ts'
import { plateOf, polygon } from '../../support/plates.ts'

const PAPER = 0xffffff

// a plate of 1 by 0.5 units of 100 mm each, which at 1600 by 1000 fills the pixels 205 to 1395 and 60 to 655
const LEFT = 205
const TOP = 60
const SCALE = 1190

const plate = {
  ...plateOf([polygon([[0, 0], [1, 0], [1, 0.5], [0, 0.5]], null)]),
  unit: { length: 100, thickness: 8, stress: 50 }
}
const mesh = meshPlate(plate, { raiser: [], all: 0 }, 'mixed')

/** Order 1, displacements of a uniform stress sxx (plate units): u = sxx x, v = -nu sxx y. */
function pulled(sxx: number): FigureSubject['solution'] {
  const coefficient = Float64Array.from(mesh.point, (x, i) => (i % 2 === 0 ? sxx * x : -plate.nu * sxx * x))
  return { plate, mesh, order: 1, coefficient, residual: 0, balance: 0 }
}

function raiserWith(peak: number, net: number | null): RaiserVerdict {
  return {
    id: 'relief',
    kind: 'hole',
    kt: net === null ? null : { net: Math.abs(peak / net), gross: 4, error: 0.002, flexure: null },
    peak: { stress: peak, error: 0.1, setBy: 'order', at: [40, 20], where: '' },
    nominal: net === null ? null : { net, gross: 50, flexure: null, how: '' },
    chart: null,
    history: []
  }
}

function verdictOf(raisers: RaiserVerdict[]): Verdict {
  return {
    offchart: '0.1.0',
    case: 'Hanger strap',
    file: 'hanger.yaml',
    settled: true,
    governing: raisers.length > 0 ? raisers[0].id : null,
    margin: null,
    fixedOrder: null,
    tolerance: 0.001,
    units: { length: 'mm', force: 'kN', stress: 'MPa' },
    raisers,
    checks: { balance: 0, residual: 0, freeEdge: 0 },
    mesh: { elements: 'mixed', triangles: 4, quads: 0, order: 1, dof: 20, smallestAngle: 0.5, worstShape: 0.5 },
    time: { mesh: 0, solve: 0, total: 0 },
    warnings: []
  }
}

const plateCase = {
  name: 'Hanger strap',
  units: { length: 'mm', force: 'kN', stress: 'MPa' },
  thickness: 8,
  load: { axial: 24, moment: 0 }
} as unknown as PlateCase

function draw(sxx: number, raisers: RaiserVerdict[], size = {}) {
  const bytes = renderFigure({ verdict: verdictOf(raisers), plate, solution: pulled(sxx) }, plateCase, size)
  const png = PNG.sync.read(Buffer.from(bytes))
  const colourAt = (x: number, y: number) => {
    const i = 4 * (y * png.width + x)
    return (png.data[i] << 16) | (png.data[i + 1] << 8) | png.data[i + 2]
  }
  return { bytes, png, colourAt }
}

/** Sum of the three components: 765 for paper. */
const brightness = (colour: number) => (colour >> 16) + ((colour >> 8) & 255) + (colour & 255)

describe('renderFigure', () => {
  it('has the size that was asked for, 1600 by 1000 by default', () => {
    const { png } = draw(1, [])
    expect([png.width, png.height]).toEqual([1600, 1000])
    const { png: small } = draw(1, [], { width: 480, height: 300 })
    expect([small.width, small.height]).toEqual([480, 300])
  })

  it('shows the stress as a multiple of the net nominal at the governing raiser', () => {
    // 2 plate units are 100 MPa: 1.25 times the nominal of 80, on a scale that ends at 240 / 80
    const { colourAt } = draw(2, [raiserWith(240, 80)])
    expect(colourAt(1000, 500)).toBe(colourOfStress(makeScale(0, 3), 1.25))
    expect(colourAt(300, 100)).toBe(colourOfStress(makeScale(0, 3), 1.25))
  })

  it('shows the stress unit where there is no nominal', () => {
    const { colourAt } = draw(2, [raiserWith(240, null)])
    expect(colourAt(1000, 500)).toBe(colourOfStress(makeScale(0, 240), 100))
  })

  it('shows the smallest principal stress where compression governs', () => {
    const { colourAt } = draw(-2, [raiserWith(-240, -80)])
    expect(colourAt(1000, 500)).toBe(colourOfStress(makeScale(-3, 0), -1.25))
  })

  it('ends the scale at the governing peak where the field goes beyond it', () => {
    const { colourAt } = draw(9, [raiserWith(240, 80)])
    expect(colourAt(1000, 500)).toBe(colourOfStress(makeScale(0, 3), 3))
  })

  it('draws the sides inside the plate over the field where that is asked for, and only there', () => {
    const [plain, meshed] = [draw(2, [raiserWith(240, 80)]), draw(2, [raiserWith(240, 80)], { mesh: true })]
    const inner = Array.from(mesh.sideBoundary.keys()).filter((s) => mesh.sideBoundary[s] < 0)
    expect(inner.length).toBeGreaterThan(0)
    for (const s of inner) {
      const [a, b] = [mesh.side[2 * s], mesh.side[2 * s + 1]]
      const x = Math.floor(LEFT + (SCALE * (mesh.point[2 * a] + mesh.point[2 * b])) / 2)
      const y = Math.floor(TOP + SCALE / 2 - (SCALE * (mesh.point[2 * a + 1] + mesh.point[2 * b + 1])) / 2)
      const darkest = Math.min(...[-1, 0, 1].flatMap((dx) => [-1, 0, 1].map((dy) => brightness(meshed.colourAt(x + dx, y + dy)))))
      expect(darkest).toBeLessThan(brightness(plain.colourAt(x, y)) - 20)
    }
    let changed = 0
    for (let y = 100; y < 600; y++) for (let x = 300; x < 1300; x++) if (plain.colourAt(x, y) !== meshed.colourAt(x, y)) changed++
    expect(changed).toBeLessThan(0.05 * 500 * 1000)
  })

  it('draws the outline where the geometry has it', () => {
    const { colourAt } = draw(0.1, [raiserWith(240, 80)])
    for (const [x, y, dx, dy] of [
      [LEFT, 300, -1, 0],
      [LEFT + SCALE, 300, 1, 0],
      [700, TOP, 0, -1],
      [700, TOP + SCALE / 2, 0, 1]
    ]) {
      // the line is 2.2 pixels wide: full one pixel to either side, gone at three
      expect(brightness(colourAt(x, y))).toBeLessThan(200)
      expect(brightness(colourAt(x - 1, y - 1))).toBeLessThan(260)
      expect(colourAt(x + 3 * dx, y + 3 * dy)).toBe(PAPER)
      expect(brightness(colourAt(x - 4 * dx, y - 4 * dy))).toBeGreaterThan(600)
    }
  })

  it('rings the governing peak', () => {
    const { colourAt } = draw(0.1, [raiserWith(240, 80)])
    const x = LEFT + 0.4 * SCALE
    const y = TOP + SCALE / 2 - 0.2 * SCALE
    const elsewhere = raiserWith(240, 80)
    const bare = draw(0.1, [{ ...elsewhere, peak: { ...elsewhere.peak!, at: [80, 40] } }])
    for (const [dx, dy] of [[19, 0], [-19, 0], [0, 19], [0, -19]]) {
      expect(brightness(colourAt(x + dx, y + dy))).toBeLessThan(250)
      expect(brightness(bare.colourAt(x + dx, y + dy))).toBeGreaterThan(600)
    }
    expect(colourAt(x, y)).toBe(colourAt(x + 60, y))
  })

  it('draws a plate without a raiser, and one without stress', () => {
    expect(draw(1, []).colourAt(1000, 500)).toBe(colourOfStress(makeScale(0, 50), 50))
    expect(draw(0, []).colourAt(1000, 500)).toBe(colourOfStress(makeScale(0, 1), 0))
  })

  it('writes the key and the foot', () => {
    const { colourAt } = draw(1, [raiserWith(240, 80)])
    const inkIn = ([x0, y0, x1, y1]: number[]) => {
      let dark = 0
      for (let y = y0; y < y1; y++) for (let x = x0; x < x1; x++) if (brightness(colourAt(x, y)) < 400) dark++
      return dark
    }
    // title, numbers, case, finding, caution, version
    for (const box of [
      [60, 685, 900, 720],
      [60, 778, 740, 850],
      [60, 880, 400, 915],
      [1100, 880, 1540, 915],
      [60, 950, 900, 985],
      [1300, 950, 1540, 985]
    ]) {
      expect(inkIn(box), String(box)).toBeGreaterThan(300)
    }
    // and nothing runs over the margins
    expect(inkIn([0, 660, 58, 1000]) + inkIn([1542, 660, 1600, 1000])).toBe(0)
  })

  it('gives the same bytes for the same case', () => {
    expect(draw(1, [raiserWith(240, 80)]).bytes).toEqual(draw(1, [raiserWith(240, 80)]).bytes)
  })

  it('refuses a size that is none', () => {
    for (const size of [{ width: 0 }, { width: 1600.5 }, { height: 20 }, { width: 1e6, height: 1e6 }, { width: NaN }]) {
      expect(() => draw(1, [], size)).toThrow(RangeError)
    }
  })
})
