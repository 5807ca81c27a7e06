// What the case file may say and this version does not solve yet, each in a sentence.

import type { CaseFile } from './schema.ts'
import type { Finding } from './source.ts'

/** Every part of a case that this version does not solve. */
export function findUnsupported({ plate, holes, load, nominal }: CaseFile): Finding[] {
  const findings: Finding[] = []
  const say = (path: (string | number)[], what: string, instead: string) =>
    findings.push({ code: 'unsupported', path, message: `${what} not supported yet: ${instead}` })
  if ('corners' in plate) say(['plate', 'corners'], 'a plate from corners is', 'a bar of sections is')
  if ('outline' in plate) say(['plate', 'outline'], 'a plate from an outline is', 'a bar of sections is')
  if ('ends' in plate) {
    for (const side of ['left', 'right'] as const) {
      if (plate.ends[side] === 'round') say(['plate', 'ends', side], 'round ends are', 'square ends are')
    }
  }
  holes.forEach(({ shape }, i) => {
    if (shape !== 'circle') say(['holes', i, 'shape'], `a hole of shape ${shape} is`, 'circle is')
  })
  const loads = { pin: 'a pin load is', pins: 'pin loads are', edges: 'edge tractions are', remote: 'a remote stress is' }
  for (const [key, what] of Object.entries(loads)) {
    if (key in load) say(['load', key], what, 'axial and moment on the ends are')
  }
  if (nominal) say(['nominal'], 'a nominal stress of your own is', 'the net and gross section stresses are')
  return findings
}
