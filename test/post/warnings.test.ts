import { describe, expect, it } from 'vitest'
import { readCase } from '../../src/case/read.ts'
import { verify } from '../../src/verify.ts'

const strip = { sections: [{ width: 40, length: 200 }] }
function warningsOf(parts: object, tolerance?: number): readonly string[] {
  return verify(readCase(JSON.stringify({ name: 'plate', thickness: 5, load: { axial: 10000 }, plate: strip, ...parts }), 'plate'), { file: 'plate', tolerance }).verdict.warnings
}
const bore = (diameter: number, x: number, y = 0) => ({ id: 'bore', shape: 'circle', diameter, at: [x, y] })

describe('warnings', () => {
  it('none for a plain case', () => expect(warningsOf({ holes: [bore(10, 100)] })).toEqual([]))

  it('an eccentric net section under a force, and none where only a moment acts', () => {
    expect(warningsOf({ holes: [bore(10, 100, 6)] })).toEqual([expect.stringMatching(/^bore: the net section is off the line of the load/)])
    expect(warningsOf({ holes: [bore(26, 100, 6)], load: { moment: 1e5 } }).filter((text) => text.includes('line of the load'))).toEqual([])
  })

  it('the largest stress is at no raiser: a small hole at mid-depth of a bent bar', () => {
    const [warning, ...others] = warningsOf({ holes: [bore(8, 100)], load: { moment: 1e5 } })
    expect(others).toEqual([])
    // 6 M / (t W^2) = 75 MPa at the outer edge; at the hole 12 M r / (t (W^3 - d^3)) times about 2 is 30
    expect(warning).toMatch(/^the largest stress of the plate, 7[45]\.\d+ MPa, is at no stress raiser: .*bore \(30\.\d+ MPa\)$/)
    expect(warningsOf({ holes: [bore(30, 100)], load: { moment: 1e5 } })).toEqual([])
  })

  it('a raiser nearer to a loaded end than the width', () => {
    expect(warningsOf({ holes: [bore(10, 40)] })).toEqual([expect.stringMatching(/^bore: nearer to the left end/)])
    expect(warningsOf({ holes: [bore(10, 160)] })).toEqual([expect.stringMatching(/^bore: nearer to the right end/)])
    expect(warningsOf({ holes: [bore(10, 46)] })).toEqual([])
  })

  it('a peak above yield, with the ratio', () => {
    // gross 50 MPa, Kt gross 3.24: 162 MPa
    expect(warningsOf({ holes: [bore(10, 100)], material: { yield: 81 } })).toEqual([expect.stringMatching(/^bore: the peak is (1\.99|2\.0\d?|2) times the yield stress of 81 MPa/)])
    expect(warningsOf({ holes: [bore(10, 100)], material: { yield: 200 } })).toEqual([])
  })

  it('a sharp corner is named, and is no place to compare the largest stress with', () => {
    const plate = { sections: [{ width: 60, length: 150 }, { width: 40, length: 150 }], fillets: [0] }
    const named = expect.stringMatching(/^shoulder-1: a sharp re-entrant corner\. .* no bound and is above every peak/)
    expect(warningsOf({ plate, holes: [bore(10, 75)] })).toEqual([named])
    const bent = warningsOf({ plate, holes: [bore(6, 75)], load: { moment: 1e5 } })
    expect(bent).toEqual([named, expect.stringMatching(/^apart from the sharp corners the largest stress, /)])
  })

  it('a nominal stress above yield is said too', () => {
    expect(warningsOf({ holes: [bore(10, 100)], material: { yield: 60 } })).toEqual([expect.stringMatching(/the net nominal stress itself is 1\.11 times yield$/)])
  })
})
