/** @throws RangeError naming the argument unless it is a finite number. */
export function requireFinite(name: string, value: number): void {
  if (!Number.isFinite(value)) throw new RangeError(`${name} must be a finite number, got ${value}`)
}

/** @throws RangeError naming the argument unless it is finite and above zero. */
export function requirePositive(name: string, value: number): void {
  if (!(value > 0 && value < Number.POSITIVE_INFINITY)) {
    throw new RangeError(`${name} must be positive and finite, got ${value}`)
  }
}

/** @throws RangeError naming the argument unless it is finite and not below zero. */
export function requireNotNegative(name: string, value: number): void {
  if (!(value >= 0 && value < Number.POSITIVE_INFINITY)) {
    throw new RangeError(`${name} must be finite and not negative, got ${value}`)
  }
}

/** @throws RangeError naming the argument unless 0 < value < 1. */
export function requireProbability(name: string, value: number): void {
  if (!(value > 0 && value < 1)) throw new RangeError(`${name} must lie between 0 and 1, got ${value}`)
}

/** @throws RangeError naming the argument unless it is above zero; infinity is accepted. */
export function requireDegreesOfFreedom(name: string, value: number): void {
  if (!(value > 0)) throw new RangeError(`${name} must be above 0 (Infinity is accepted), got ${value}`)
}
