import { describe, expect, it } from 'vitest'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromHalfWidth,
  standardUncertaintyFromResolution,
} from '#app/metrology/instrument-accuracy.ts'
import { expectNear } from '#tests/support/near.ts'
import published from './data/uncertainty.json'

describe('instrument accuracy', () => {
  it('has the divisors of JCGM 100:2008, 4.3.7 to 4.3.9 and F.2.2.1', () => {
    const { data, expected, tolerance } = published.typeB_divisors
    const { half_width } = data
    expectNear(standardUncertaintyFromHalfWidth(half_width), expected.rectangular, tolerance)
    expectNear(standardUncertaintyFromHalfWidth(half_width, 'triangular'), expected.triangular, tolerance)
    expectNear(standardUncertaintyFromHalfWidth(half_width, 'uShaped'), expected.arcsine_U, tolerance)
    expectNear(standardUncertaintyFromResolution(1), expected.digital_resolution_full_width_1, tolerance)
  })

  it('adds percentage and digits before it divides', () => {
    // ±(0.5 % of 200 V + 2 digits of 0.1 V) = ±1.2 V
    const meter = { reading: 200, percentOfReading: 0.5, digits: 2, digitSize: 0.1 }
    expectNear(standardUncertaintyFromAccuracy(meter), 1.2 / Math.sqrt(3), { rel: 1e-14 })
    expectNear(standardUncertaintyFromAccuracy({ ...meter, reading: -200 }), 1.2 / Math.sqrt(3), {
      rel: 1e-14,
    })
    expectNear(standardUncertaintyFromAccuracy({ ...meter, reading: 0 }), 0.2 / Math.sqrt(3), { rel: 1e-14 })
  })

  it('refuses by name', () => {
    const good = { reading: 200, percentOfReading: 0.5, digits: 2, digitSize: 0.1 }
    for (const name of Object.keys(good)) {
      expect(() => standardUncertaintyFromAccuracy({ ...good, [name]: Number.NaN })).toThrow(RangeError)
      expect(() => standardUncertaintyFromAccuracy({ ...good, [name]: Number.NaN })).toThrow(name)
    }
    expect(() => standardUncertaintyFromAccuracy({ ...good, percentOfReading: -1 })).toThrow(
      'percentOfReading',
    )
    expect(() => standardUncertaintyFromResolution(-1)).toThrow('step')
    expect(() => standardUncertaintyFromHalfWidth(Number.POSITIVE_INFINITY)).toThrow('halfWidth')
  })
})
