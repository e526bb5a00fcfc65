import type { Channel } from '#app/safety/types.ts'

type Quantity = 'volts' | 'amps' | 'celsius'

const quantityOf: Record<Channel, Quantity> = {
  heaterVolts: 'volts',
  heaterAmps: 'amps',
  anodeVolts: 'volts',
  anodeSupplyVolts: 'volts',
  anodeAmps: 'amps',
  coilAmps: 'amps',
  coilSupplyAmps: 'amps',
  coilVolts: 'volts',
  coilCelsius: 'celsius',
}

/** A unit is used from so many of it on. */
const units: Record<Quantity, readonly { unit: string; size: number; from: number }[]> = {
  volts: [
    { unit: 'V', size: 1, from: 0.01 },
    { unit: 'mV', size: 1e-3, from: 0 },
  ],
  amps: [
    { unit: 'A', size: 1, from: 0.1 },
    { unit: 'mA', size: 1e-3, from: 0.1 },
    { unit: 'µA', size: 1e-6, from: 0 },
  ],
  celsius: [{ unit: '°C', size: 1, from: 0 }],
}

/** A difference on a channel, such as a standard deviation or a tolerance: two digits, with its unit. */
export function differenceInWords(channel: Channel, difference: number): string {
  const known = units[quantityOf[channel]]
  const fitting = known.find(({ size, from }) => difference === 0 || difference >= from * size)
  if (!fitting) throw new RangeError(`difference must not be negative, got ${difference}`)
  return `${twoDigits(difference / fitting.size)} ${fitting.unit}`
}

function twoDigits(value: number): string {
  const decimals = value >= 10 || value === 0 ? 0 : Math.min(2, 1 - Math.floor(Math.log10(value)))
  return value.toFixed(decimals)
}
