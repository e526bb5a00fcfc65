import { describe, expect, it } from 'vitest'
import { judgeStability, newestStretch } from '#app/analysis/stability.ts'
import { forecastCoils } from '#app/components/stability/forecast.ts'
import { stabilitySentences, withPrefix } from '#app/components/stability/stability-words.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import { advanceCoilTemperature, coilResistanceOhms } from '#app/physics/coil-heating.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { expectNear } from '#tests/support/near.ts'

const words = (values: (number | null)[], { unit = 'V', now = (values.length - 1) / 10 } = {}) => {
  const stretch = newestStretch({ seconds: values.map((_, i) => i / 10 - now), values })
  const samples = stretch.values.length
  const text = stabilitySentences({
    label: 'anode voltage',
    unit,
    samples,
    seconds: samples * stretch.intervalSeconds,
    endedAgo: -(stretch.endSeconds ?? 0),
    stability: samples >= 100 ? judgeStability(stretch) : null,
  })
  return text.join(' ').replaceAll('\u2009', ' ')
}
const noisy = (count: number, perSample = 0) => {
  const random = new RandomNumbers(5)
  return Array.from({ length: count }, (_, i) => 200 + 0.01 * random.normal() + perSample * i)
}

describe('What a channel says of itself', () => {
  it('is how long to wait, with too few samples', () => {
    expect(words(noisy(40))).toBe(
      'There are 40 samples without a gap, and at least 100 are needed: wait 6 s more.',
    )
    expect(words([200])).toBe('There is 1 sample without a gap, and at least 100 are needed.')
    expect(words([])).toMatch(/^There are 0 samples .* needed\.$/)
  })

  it('counts from the last gap on', () => {
    expect(words([...noisy(500), null, ...noisy(99)])).toMatch(/^There are 99 samples/)
    expect(words([...noisy(500), null, ...noisy(100)])).toMatch(/^10 s of the anode voltage, 100 samples/)
  })

  it('is how long it is best averaged, and whether it drifts, with a prefix where one helps', () => {
    const still = words(noisy(1200))
    expect(still).toMatch(/^120 s of the anode voltage, 1200 samples\. It is steadiest averaged over \d+ s/)
    expect(still).toMatch(/two such means differ by about \d+ µV\./)
    expect(still).toMatch(/No trend is told from chance \(p = 0\.\d\d\)\.$/)
    const drifting = words(noisy(1200, 0.0002))
    expect(drifting).toMatch(/Averaged over [\d.]+ s or longer, drift takes over\./)
    expect(drifting).toMatch(/It rises by (0\.12 V|1[12]0 mV) a minute \(p below 0\.0001\)\.$/)
    expect(words(noisy(1200, -0.0002))).toMatch(/It falls by/)
  })

  it('is that its last digit does not move', () => {
    expect(words(Array.from({ length: 200 }, () => 6.3))).toMatch(/Its last digit does not move/)
  })

  it('tells when it ended, where the channel has gone since', () => {
    expect(words(noisy(200), { now: 40 })).toMatch(/200 samples, which ended 20 s ago\./)
  })

  it.each([
    [0.000052, 'A', 'µA', 1e6],
    [0.0123, 'V', 'mV', 1e3],
    [1.2, 'V', 'V', 1],
    [0.01, '°C', '°C', 1],
    [0, 'A', 'A', 1],
  ])('has sizes like %s %s in %s', (size, unit, shown, factor) => {
    expect(withPrefix(size, unit)).toEqual({ unit: shown, factor })
  })
})

describe('The forecast of the coils', () => {
  const [bench] = demoBenches
  if (!bench) throw new Error('The demo has no bench')
  const text = (celsius: number, amps: number) => forecastCoils(bench, { celsius, amps }).sentences.join(' ')

  it('says where the temperature goes, and that the limit is not reached', () => {
    expect(text(21, 0)).toBe(
      'The coils have 21.0 °C at 0.00 A. At this current they come to 21 °C in the end. The limit of 60 °C is not reached.',
    )
    expect(forecastCoils(bench, { celsius: 40, amps: 0 }).steps).toEqual([])
    // 1.8 K/W times (1.5 A)² of 4.3 Ω at 21 °C, that grows by 0.39 % a kelvin: 17.4 K / (1 − 0.068).
    expect(text(21, 1.5)).toMatch(/they come to 40 °C in the end\. The limit of 60 °C is not reached\./)
    expect(text(21, -1.5)).toBe(text(21, 1.5))
  })

  it('says when it comes to which temperature and to the limit, as the cooling model has it step by step', () => {
    const { sentences, steps } = forecastCoils(bench, { celsius: 31, amps: 2.6 })
    expect(steps.map(({ celsius }) => celsius)).toEqual([35, 40, 45, 50, 55, 60])
    expect(sentences[2]).toMatch(/^The limit of 60 °C is reached in \d+\u2009min\.$/)
    let celsius = 31
    let seconds = 0
    for (const step of steps) {
      while (celsius < step.celsius) {
        const ohms = coilResistanceOhms({
          temperatureCelsius: celsius,
          referenceOhms: bench.coilResistance.ohms,
          referenceCelsius: bench.coilResistance.celsius,
        })
        celsius = advanceCoilTemperature({
          temperatureCelsius: celsius,
          powerWatts: 2.6 ** 2 * ohms,
          durationSeconds: 0.5,
          ...bench.coilThermal,
        })
        seconds += 0.5
      }
      expectNear(step.seconds, seconds, { rel: 0.003, abs: 1 })
    }
  })

  it('says that the limit is passed, and that there may be no end', () => {
    expect(text(61, 1)).toMatch(/They are at the limit of 60 °C or above it\./)
    expect(text(30, 9)).toMatch(/would heat without end\. The limit of 60 °C is reached in/)
  })
})
