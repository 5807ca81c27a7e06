// Cases from plain objects, as a test would write them in a file.

import { buildPlate } from '../../src/case/build.ts'
import type { Plate } from '../../src/case/plate.ts'
import { readCase } from '../../src/case/read.ts'
import type { PlateCase } from '../../src/case/schema.ts'

/** The case of a file with these fields; a name is given to it. */
export function caseFrom(fields: object): PlateCase {
  return readCase(JSON.stringify({ name: 'test', ...fields }), 'test.json')
}

/** The plate of a file with these fields, and the case's units. */
export function plateFrom(fields: object): { plate: Plate; units: PlateCase['units'] } {
  const plateCase = caseFrom(fields)
  return { plate: buildPlate(plateCase), units: plateCase.units }
}
