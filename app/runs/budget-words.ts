const words: Record<string, string> = {
  anodeMeter: 'accuracy of the anode meter',
  anodeCorrection: 'verification of the anode meter',
  coilMeter: 'accuracy of the coil meter',
  scaleDistance: 'distance of the scale behind the beam',
  rungDistance: 'distance of the rungs from the gun',
  fieldFactor: 'field factor of the coils',
  coilTurns: 'number of turns',
  coilRadius: 'radius of the coils',
  coilSeparation: 'separation of the coils',
  beamEdge: 'edge of the beam',
}

/** A line of a reading's budget, in words. */
export const budgetLineWords = (name: string): string =>
  words[name] ?? name.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`)
