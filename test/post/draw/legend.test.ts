import { describe, expect, it } from 'vitest'
import { roundStep, ticksOf } from '../../../src/post/draw/legend.ts'
import { makeScale } from '../../../src/post/draw/scale.ts'
import { expectNear } from '../../support/near.ts'

describe('roundStep', () => {
  it.each([[0.3, 0.5], [0.5, 0.5], [0.51, 1], [1.2, 2], [30, 50], [99, 100], [6e-4, 1e-3]])('of %d is %d', (least, step) => {
    expectNear(roundStep(least), step, { rel: 1e-12, because: '1, 2 or 5 times a power of ten' })
  })
})

describe('ticksOf', () => {
  it('gives zero, round numbers and the end', () => {
    expect(ticksOf(makeScale(0, 3.1133), 0.3)).toEqual([0, 0.5, 1, 1.5, 2, 2.5, 3.1133])
  })

  it('leaves out a round number that an end would crowd, and an end that would crowd zero', () => {
    expect(ticksOf(makeScale(-0.1, 2.1), 0.3)).toEqual([0, 0.5, 1, 1.5, 2.1])
    expect(ticksOf(makeScale(-3.2, 0.1), 0.6)).toEqual([-3.2, -2, -1, 0])
  })

  it('shows both ends where both matter', () => {
    expect(ticksOf(makeScale(-1.4, 3.1), 0.5)).toEqual([-1.4, 0, 1, 2, 3.1])
  })
})
