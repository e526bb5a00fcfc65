import type { Diagnosis, Subset } from './diagnosis.ts'
import { plausibleSizes } from './diagnosis.ts'
import type { Effect, Prior } from './series-model.ts'

export const effectWords: Record<Effect, string> = {
  strayFieldTesla: 'stray field along the coil axis',
  voltageOffsetVolts: 'offset of the anode voltage',
  scaleOffsetMetres: 'offset of the scale',
}

const units: Record<Effect, { unit: string; size: number; decimals: number }> = {
  strayFieldTesla: { unit: 'µT', size: 1e-6, decimals: 0 },
  voltageOffsetVolts: { unit: 'V', size: 1, decimals: 1 },
  scaleOffsetMetres: { unit: 'mm', size: 1e-3, decimals: 2 },
}

/** What an effect of a size that occurs is: common practice. */
const usualWords: Record<Effect, string> = {
  strayFieldTesla: 'the earth’s field is 25 to 65 µT',
  voltageOffsetVolts: 'a contact potential is a volt or so',
  scaleOffsetMetres: 'a scale is off by a millimetre or so',
}

export const effectUnit = (effect: Effect): string => units[effect].unit

/** A size in its unit, as a number. */
export const inUnit = (effect: Effect, value: number): number => value / units[effect].size

const number = (value: number, decimals: number): string => value.toFixed(decimals).replace('-', '−')

/** '52 ± 9 µT': with the standard uncertainty. */
export function sizeWords(effect: Effect, { value, standardUncertainty }: Prior): string {
  const { unit, size } = units[effect]
  const uncertainty = standardUncertainty / size
  const decimals = Math.max(0, Math.min(3, 1 - Math.floor(Math.log10(uncertainty || 1))))
  return `${number(value / size, decimals)} ± ${number(uncertainty, decimals)} ${unit}`
}

export const combinationWords = (wanted: readonly Effect[]): string =>
  wanted.length === 0 ? 'none' : wanted.map((effect) => effectWords[effect]).join(' and ')

const sizesOf = ({ effects: wanted, sizes }: Subset): string =>
  wanted.map((effect) => `${effectWords[effect]} ${sizeWords(effect, sizes[effect] as Prior)}`).join(', ')

/** What the diagnosis says, in sentences, without any value that e/m ought to have. */
export function diagnosisWords(
  diagnosis: Diagnosis,
  numbers: readonly number[],
): { finding: string[]; notApart: string[]; unseen: string[]; checks: string[] } {
  return {
    finding: [...findingWords(diagnosis), ...outlierWords(diagnosis, numbers)],
    notApart: apartWords(diagnosis),
    unseen: [...unseen],
    checks: diagnosis.finding.kind === 'unexplained' ? [...checks] : [],
  }
}

function findingWords({ finding, subsets }: Diagnosis): string[] {
  const plain = subsets.find(({ effects: wanted }) => wanted.length === 0)
  const fitWords = plain
    ? `χ² is ${plain.chiSquared >= 100 ? plain.chiSquared.toFixed(0) : plain.chiSquared.toPrecision(3)} on ${plain.degreesOfFreedom}`
    : 'no line can be fitted'
  switch (finding.kind) {
    case 'too-few':
      return [
        'With fewer than three readings nothing can be said of what shifts e/m. Its uncertainty holds what is known of the bench.',
      ]
    case 'agreement':
      return [
        `The readings agree with one value of e/m within their own uncertainties (${fitWords}). No effect has to be assumed to explain them.`,
        'An effect that moves all of them alike would not show in this: the stated uncertainty allows for those that are known.',
      ]
    case 'effect': {
      const { subset } = finding
      return [
        `The readings do not agree with one value of e/m alone (${fitWords}). They do with one effect${subset.effects.length > 1 ? ' more than one' : ''}: ${sizesOf(subset)}.`,
        `${subset.effects.map((effect) => `That is a size that occurs: ${usualWords[effect]}.`).join(' ')} The stated value takes it in, with its uncertainty.`,
      ]
    }
    case 'ambiguous':
      return [
        `The readings do not agree with one value of e/m alone (${fitWords}), and they do not tell which effect it is.`,
        `Each of these explains them: ${finding.subsets.map(sizesOf).join('; or ')}. The stated value allows for each; further settings would tell them apart.`,
      ]
    case 'unexplained':
      return [
        `No single line fits the readings: ${fitWords}.`,
        `Each effect that would mend it would have to be far too large: ${finding.wouldNeed
          .map(({ effect, size }) => `${effectWords[effect]} ${sizeWords(effect, size)}`)
          .join(', ')}. Sizes that occur are up to ${(Object.keys(plausibleSizes) as Effect[])
          .map((effect) => `${number(plausibleSizes[effect] / units[effect].size, 0)} ${units[effect].unit}`)
          .join(', ')}.`,
        'So nothing plausible explains the readings, and no corrected value is stated. What is wrong has to be found at the bench.',
      ]
  }
}

function outlierWords({ outliers }: Diagnosis, numbers: readonly number[]): string[] {
  if (outliers.length === 0) return []
  const which = outliers.map(({ index }) => String(numbers[index] ?? index + 1))
  const list = which.length === 1 ? `Reading ${which[0]} lies` : `Readings ${listed(which)} lie`
  return [
    `${list} far from the fit and ${which.length === 1 ? 'is' : 'are'} flagged. A flagged reading still counts: strike it only for a reason that was seen at the bench.`,
  ]
}

function apartWords({ notApart }: Diagnosis): string[] {
  const withValue = notApart.filter(({ a }) => a === 'chargeToMass')
  const others = notApart.filter(({ a }) => a !== 'chargeToMass')
  const size = (correlation: number) => number(correlation, 2)
  return [
    ...(withValue.length > 0
      ? [
          `e/m moves together with ${listed(withValue.map(({ b, correlation }) => `the ${effectWords[b]} (correlation ${size(correlation)})`))}: these settings hardly tell the one from the other.`,
        ]
      : []),
    ...(others.length > 0
      ? [
          `So do ${listed(others.map(({ a, b, correlation }) => `the ${effectWords[a as Effect]} and the ${effectWords[b]} (${size(correlation)})`))}.`,
        ]
      : []),
  ]
}

function listed(words: readonly string[]): string {
  return words.length < 2 ? (words[0] ?? '') : `${words.slice(0, -1).join(', ')}, and ${words.at(-1)}`
}

/** True of all data of this kind. */
const unseen = [
  'A constant percentage error of the scale, of the coils’ field or of the voltmeter moves every reading alike: it is in the budget, and no set of readings can show it.',
  'A tilt of the tube or of the coils acts like such a percentage.',
  'Energy that the electrons lose to the gas makes every orbit a little smaller, more so at a low voltage; it passes for an offset of the anode voltage.',
]

const checks = [
  'Which edge of the beam was read, and whether the same on both sides: the outer edges belong to the electrons of full energy.',
  'The scale: its zero, its unit, and whether a radius was written down for a diameter.',
  'Whether the current is that through each coil: in parallel each has half of what the meter shows.',
  'The number of turns, the radius and the separation of the coils against the bench’s data.',
  'The voltmeter at the tube’s own terminals, with the supply’s polarity and range.',
  'The beam: whether it closes to a circle in one plane, and was in focus at each setting.',
]
