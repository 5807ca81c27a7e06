import { describe, expect, it } from 'vitest'
import { reportText } from '../../src/post/report.ts'
import type { RaiserVerdict, Verdict } from '../../src/post/verdict.ts'

const relief: RaiserVerdict = {
  id: 'relief',
  kind: 'hole',
  kt: { net: 3.1133, gross: 4.2454, error: 0.0011, flexure: null },
  peak: { stress: 212.27, error: 0.08, setBy: 'order', at: [95.526, 7.983], where: 'at 86 degrees on the edge of the hole, counter-clockwise from +x' },
  nominal: { net: 68.1818, gross: 50, flexure: null, how: 'P / (t (W − d)) = 24000 / (8 × 44)' },
  chart: null,
  history: [
    { mesh: 1, order: 5, dof: 2100, kt: 3.05, peak: 207.9, freeEdge: 0.02, step: 0.011 },
    { mesh: 2, order: 6, dof: 13100, kt: 3.1133, peak: 212.27, freeEdge: 0.003, step: 0 }
  ]
}

const shoulder: RaiserVerdict = {
  id: 'shoulder-1',
  kind: 'shoulder',
  kt: { net: 1.98, gross: 2.97, error: 0.013, flexure: 2.1 },
  peak: { stress: -148.5, error: 0.92, setBy: 'free edge', at: [114.1, -20.2], where: '14 degrees up the fillet from the narrow edge, lower side' },
  nominal: { net: 75, gross: 50, flexure: 80.123, how: 'P / (t d) = 24000 / (8 × 40)' },
  chart: null,
  history: []
}

const sharp: RaiserVerdict = {
  id: 'shoulder-2',
  kind: 'shoulder',
  kt: null,
  peak: null,
  nominal: null,
  why: 'a sharp re-entrant corner has no finite Kt',
  chart: null,
  history: []
}

const verdict: Verdict = {
  offchart: '0.1.0',
  case: 'Lift link',
  file: 'lift-link.yaml',
  settled: true,
  governing: 'relief',
  margin: 0.14336,
  fixedOrder: null,
  tolerance: 0.001,
  units: { length: 'mm', force: 'kN', stress: 'MPa' },
  raisers: [relief, shoulder, sharp],
  checks: { balance: 1e-13, residual: 2e-16, freeEdge: 0.00042 },
  mesh: { elements: 'mixed', triangles: 310, quads: 0, order: 6, dof: 12900, smallestAngle: 22.4, worstShape: 0.5 },
  time: { mesh: 12.4, solve: 80, total: 130 },
  warnings: ['relief: the peak is 1.2 times the yield stress of 180 MPa; the linear elastic answer ends there']
}

const plain = { verbose: false, colour: false }

/** The report of `verdict` with some fields changed, as lines. */
function linesOf(changes: Partial<Verdict> = {}, options = plain): string[] {
  return reportText({ ...verdict, ...changes }, options).split('\n')
}

describe('the table', () => {
  it('has a row a raiser with decimal points under each other, and marks the governing one', () => {
    expect(linesOf().slice(3, 7)).toEqual([
      '  raiser      kind      Kt net         Kt gross  peak, MPa       x, mm   y, mm',
      '> relief      hole      3.113 ± 0.002  4.245      212.27 ± 0.08   95.53    7.98',
      '  shoulder-1  shoulder  1.98  ± 0.02   2.97      −148.5  ± 1.0   114.10  −20.20',
      '  shoulder-2  shoulder  –              –         –               –       –'
    ])
  })

  it('keeps within 80 columns whatever the ids and the units', () => {
    const long = { ...relief, id: 'the-hole-that-was-drilled-in-the-wrong-place-beside-the-shoulder', peak: { ...relief.peak!, stress: 212270000.4, error: 80000 } }
    const lines = linesOf({ raisers: [long, shoulder], units: { length: 'm', force: 'N', stress: 'Pa' } }, { verbose: true, colour: false })
    expect(lines.filter((line) => line.length > 80)).toEqual([])
  })

  it('says that there is nothing to report on a plain bar', () => {
    const text = reportText({ ...verdict, raisers: [], governing: null, margin: null, warnings: [] }, plain)
    expect(text).toContain('No stress raiser')
    expect(text).not.toContain('governs')
  })
})

describe('the words', () => {
  it('give place and nominal formula of each raiser, and why there is no Kt', () => {
    const text = reportText(verdict, plain)
    expect(text).toContain('relief\n  peak at 86 degrees on the edge of the hole, counter-clockwise from +x\n')
    expect(text).toContain('P / (t (W − d)) = 24000 / (8 × 44) = 68.18 MPa; gross 50 MPa\n')
    expect(text).toContain('with the bending of the eccentric section 80.12 MPa: Kt 2.10\n')
    expect(text).toContain('shoulder-2\n  a sharp re-entrant corner has no finite Kt\n')
  })

  it('break a long formula between its terms only', () => {
    const how = 'P / (t d) − 6 M / (t d²) = 42000 / (12 × 66) − 6 × (−180000) / (12 × 66²)'
    const text = reportText({ ...verdict, raisers: [{ ...relief, nominal: { ...relief.nominal!, how } }], margin: null }, plain)
    expect(text).toContain('  net nominal P / (t d) − 6 M / (t d²) = 42000 / (12 × 66)\n    − 6 × (−180000) / (12 × 66²) = 68.18 MPa')
  })

  it('name the governing raiser with its margin, and a tie', () => {
    const finite = { ...verdict, raisers: [relief, shoulder] }
    expect(reportText(finite, plain)).toContain('relief governs: its peak is 14 % above that of shoulder-1.')
    expect(reportText({ ...finite, margin: 1.1 }, plain)).toContain('its peak is 2.1 times that of shoulder-1.')
    expect(reportText({ ...finite, margin: 0 }, plain)).toContain('in a tie')
    expect(reportText({ ...finite, raisers: [relief], margin: null }, plain)).toContain('it is the only stress raiser')
  })

  it('name no governing raiser where another one has no bound', () => {
    const text = reportText({ ...verdict, raisers: [relief, shoulder, sharp] }, plain)
    expect(text).toContain('relief has the largest finite peak; the stress at shoulder-2 has no bound.')
    expect(text).not.toContain('governs')
  })

  it('say whether it has settled and to what', () => {
    expect(reportText(verdict, plain)).toContain('Settled: every error bar is within the tolerance of 0.1 %.')
    expect(reportText({ ...verdict, settled: false }, plain)).toContain('NOT SETTLED to the tolerance of 0.1 %')
    expect(reportText({ ...verdict, settled: false, fixedOrder: 4 }, plain)).toContain('Order 4 was fixed: the bars above are what it gives')
  })

  it('show checks, mesh, warnings, and end with the cautions', () => {
    const text = reportText(verdict, plain)
    expect(text).toContain('unbalanced load 1.0e-13, residual 2.0e-16')
    expect(text).toContain('310 triangles, 0 quads, order 6; 12900 unknowns; smallest angle 22°')
    expect(text).toContain('Warning: relief: the peak is 1.2 times the yield stress')
    expect(text.replaceAll('\n', ' ')).toMatch(/Linear elastic, plane stress, static, small displacements.*licensed engineer's judgement\. $/)
  })
})

describe('options', () => {
  it('verbose adds the history with its changes', () => {
    const lines = linesOf({}, { verbose: true, colour: false })
    const head = lines.findIndex((line) => line.includes('unknowns    Kt net'))
    expect(lines.slice(head, head + 4)).toEqual([
      '  mesh  order  unknowns    Kt net  change  free edge   step',
      '     1      5      2100  3.050000                2 %  1.1 %',
      '     2      6     13100  3.113300  +2.1 %      0.3 %    0 %',
      '  bar ± 0.0011: the last step in order, two or three times'
    ])
  })

  it('colour adds escape sequences and nothing else', () => {
    const coloured = reportText(verdict, { verbose: true, colour: true })
    expect(coloured).toContain('\x1b[')
    // oxlint-disable-next-line no-control-regex
    expect(coloured.replace(/\x1b\[\d+m/g, '')).toBe(reportText(verdict, { verbose: true, colour: false }))
  })
})
