import { derivative, parse } from 'mathjs'
import { type EvennessTable, type Reading, type ReadingBench, readingBudget } from '#app/analysis/reading.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromResolution,
} from '#app/metrology/instrument-accuracy.ts'
import { vacuumPermeability } from '#app/physics/constants.ts'

type Case = Reading & { bench: ReadingBench; evenness: EvennessTable }

/** Half-width in metres of the stretch of radii about the reading's for which g is written as a polynomial. */
const STRETCH = 0.002
const TERMS = 7

/** A function about a radius as the text of a polynomial in the radius r. */
function polynomial(f: (radius: number) => number, middle: number): string {
  const nodes = Array.from(
    { length: TERMS },
    (_, i) => middle + STRETCH * Math.cos((Math.PI * (i + 0.5)) / TERMS),
  )
  // Newton's divided differences, nested from the innermost bracket.
  const differences = nodes.map(f)
  for (let order = 1; order < TERMS; order++) {
    for (let i = TERMS - 1; i >= order; i--) {
      const [here, before] = [differences[i] as number, differences[i - 1] as number]
      differences[i] = (here - before) / ((nodes[i] as number) - (nodes[i - order] as number))
    }
  }
  let text = String(differences[TERMS - 1])
  for (let i = TERMS - 2; i >= 0; i--) text = `(${differences[i]} + (r - ${nodes[i]}) * ${text})`
  return text
}

/**
 * The budget of a reading by the expression library: one formula whose symbolic derivatives are compiled beforehand,
 * evaluated and combined for each reading; from the radius on to edges, scale and beam the chain rule is written out.
 * For thin equal coils in series and a ruler behind the beam. Degrees of freedom and coverage, which the library does not
 * have, are left out to its favour.
 *
 * @returns what works a reading of the same bench, and nearly the same edges, out
 */
export function readingByLibrary(example: Case) {
  const { bench, evenness } = example
  const [coil] = bench.coilPair.coils
  const { separationMetres } = bench.coilPair
  const { distanceBehindMetres, eyeDistanceMetres } = bench.scale
  const { contributions, diameterMetres } = readingBudget(example)
  const { g, gPerRadiusMetre, gPerSeparationMetre } = evenness
  const along = [
    polynomial((r) => g.value(r), diameterMetres / 2),
    `(R - ${coil.radiusMetres}) * ${polynomial((r) => gPerRadiusMetre.value(r), diameterMetres / 2)}`,
    `(s - ${separationMetres}) * ${polynomial((r) => gPerSeparationMetre.value(r), diameterMetres / 2)}`,
  ].join(' + ')
  const factor = `${vacuumPermeability.value} * N * R^2 / (R^2 + s^2 / 4)^1.5`
  const node = parse(`2 V / ((${factor} * I * (${along}) * r)^2 - (V / 299792458)^2)`)
  const value = node.compile()
  const slopeTo = (name: string) => derivative(node, name, { simplify: false }).compile()
  const [perV, perI, perN, perR, perS, perRadius] = ['V', 'I', 'N', 'R', 's', 'r'].map(slopeTo) as [
    ReturnType<typeof slopeTo>,
    ReturnType<typeof slopeTo>,
    ReturnType<typeof slopeTo>,
    ReturnType<typeof slopeTo>,
    ReturnType<typeof slopeTo>,
    ReturnType<typeof slopeTo>,
  ]
  const uncertainty = (name: string): number => contributions[name]?.standardUncertainty ?? 0
  const uEdges = Math.hypot(...['leftEdgeResolution', 'rightEdgeResolution', 'edgeSpread'].map(uncertainty))
  const [uBehind, uTurns, uRadius, uSeparation, uBeam] = [
    'scaleDistance',
    'coilTurns',
    'coilRadius',
    'coilSeparation',
    'beamEdge',
  ].map(uncertainty) as [number, number, number, number, number]
  const { anodeMeter, coilMeter } = bench

  return (reading: Case): { value: number; standardUncertainty: number } => {
    const uVolts = Math.hypot(
      reading.uVoltageVolts,
      standardUncertaintyFromResolution(anodeMeter.digitSizeVolts),
      standardUncertaintyFromAccuracy({
        reading: reading.voltageVolts,
        percentOfReading: anodeMeter.percentOfReading,
        digits: anodeMeter.digits,
        digitSize: anodeMeter.digitSizeVolts,
      }),
    )
    const uAmps = Math.hypot(
      reading.uCurrentAmps,
      standardUncertaintyFromResolution(coilMeter.digitSizeAmps),
      standardUncertaintyFromAccuracy({
        reading: reading.currentAmps,
        percentOfReading: coilMeter.percentOfReading,
        digits: coilMeter.digits,
        digitSize: coilMeter.digitSizeAmps,
      }),
    )
    const distances = reading.leftEdges.map((left, i) => (reading.rightEdges[i] as number) - left)
    const distance = distances.reduce((a, b) => a + b) / distances.length
    const perEdge = (eyeDistanceMetres - distanceBehindMetres) / eyeDistanceMetres / 2
    const scope = {
      V: reading.voltageVolts,
      I: reading.currentAmps,
      N: coil.turns,
      R: coil.radiusMetres,
      s: separationMetres,
      r: distance * perEdge,
    }
    const uOrbit = Math.hypot(perEdge * uEdges, (distance / eyeDistanceMetres / 2) * uBehind, uBeam)
    const standardUncertainty = Math.hypot(
      perV.evaluate(scope) * uVolts,
      perI.evaluate(scope) * uAmps,
      perN.evaluate(scope) * uTurns,
      perR.evaluate(scope) * uRadius,
      perS.evaluate(scope) * uSeparation,
      perRadius.evaluate(scope) * uOrbit,
    )
    return { value: value.evaluate(scope), standardUncertainty }
  }
}
