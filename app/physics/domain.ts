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
