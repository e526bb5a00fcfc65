import type { Free } from './points.ts'
import { quantityWords, type Symbols } from './quantities.ts'
import type { Slip } from './slips.ts'

/**
 * A slip as a sentence: of which kind it is and where to look, never what would be right.
 *
 * @param symbols those that stand in the formula
 */
export function slipSentence(slip: Slip, symbols: Symbols): string {
  switch (slip.kind) {
    case 'sign':
      return 'It comes out negative, and e/m is meant as a magnitude here.'
    case 'inverted':
      return 'It stands upside down: this is m/e, up to a factor.'
    case 'whole-power':
      return 'The whole stands in a wrong power: something was squared, or a root taken, once too often or not at all.'
    case 'field-power':
      return 'The magnetic field as a whole (turns, current and magnetic constant together) stands in a wrong power.'
    case 'absent':
      return `It does without the ${listed(slip.quantities.map((quantity) => nameOf(quantity, {})))}, and e/m as it is read depends on ${slip.quantities.length === 1 ? 'that' : 'those'}.`
    case 'wrong-side':
      return `The ${nameOf(slip.quantity, symbols)} stands in a wrong place: think what happens to the beam when it grows, and what that would make of e/m.`
    case 'power':
      return `The power of the ${nameOf(slip.quantity, symbols)} is not right.`
    case 'shape':
      return slip.quantity
        ? `It depends on the ${nameOf(slip.quantity, symbols)} in another way than the physics does: look at the sums that it stands in.`
        : 'It is of another form than the physics: at some settings it even turns negative or vanishes.'
    case 'diameter-for-radius':
      return `It would hold if ${symbols.beamDiameter ?? 'the symbol'} were the radius of the beam’s circle, and in the table it is the diameter.`
    case 'radius-for-diameter':
      return `It would hold if ${symbols.beamRadius ?? 'the symbol'} were the diameter of the beam’s circle, and in the table it is the radius.`
    case 'coil-diameter':
      return 'Radius and diameter of the coils are taken for each other.'
    case 'separation-for-radius':
      return 'Separation and radius of the coils are taken for each other.'
    case 'separation-with-radius':
      return 'It holds only where the coils are as far apart as their radius. With the separation in it, it has to hold for any: one of them stands somewhere in place of the other.'
    case 'half-separation':
      return 'The separation and its half are taken for each other: look at how far each coil is from the place of the beam.'
    case 'coil-factor-forgotten':
      return 'A constant factor is missing that comes from where the beam is between two coils: their field in the middle is not that in the plane of one.'
    case 'coil-factor-inverted':
      return 'The constant factor of the coil pair stands upside down.'
    case 'coil-factor':
      return 'The constant factor of the coil pair stands in a wrong power: look at whether it is squared with the field.'
    case 'coil-factor-needless':
      return 'The constant factor of the coil pair stands in it although the separation does: one of them is enough.'
    case 'factor':
      return 'All quantities stand as they should, and a constant factor does not: look for a 2 or 4 that is missing or too much, for what is squared with it, and whether the turns are those of one coil.'
    case 'rounded':
      return 'It is right but for a constant that is off by a little: write such a number as a fraction or a root, not rounded.'
  }
}

function listed(names: readonly string[]): string {
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`
}

function nameOf(quantity: Free, symbols: Symbols): string {
  if (quantity === 'beamRadius') {
    const { beamRadius, beamDiameter } = symbols
    const symbol = [beamRadius, beamDiameter].filter(Boolean).join(' or ')
    return symbol ? `size of the beam’s circle, ${symbol},` : 'size of the beam’s circle'
  }
  const { name } = quantityWords[quantity]
  const symbol = symbols[quantity]
  return symbol ? `${name}, ${symbol},` : name
}
