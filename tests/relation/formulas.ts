import type { Symbols } from '#app/relation/quantities.ts'
import { RandomNumbers } from '#app/statistics/random.ts'

/** Symbols as a student might name them; a formula uses what it needs. */
export const symbols: Required<Symbols> = {
  anodeVoltage: 'V',
  coilCurrent: 'I',
  beamDiameter: 'd',
  beamRadius: 'r',
  turns: 'N',
  coilRadius: 'R',
  coilSeparation: 's',
  magneticConstant: 'μ0',
}

/** Repeatable chance. */
export function chance(seed: number): () => number {
  const numbers = new RandomNumbers(seed)
  return () => numbers.uniform()
}

/**
 * The relation in shapes that students write: e/m = 2V/(Br)² with the field of the pair at its centre put in, for coils as
 * far apart as their radius B = (4/5)^(3/2) μ₀NI/R, and B = μ₀NIR²/(R² + s²/4)^(3/2) for any.
 *
 * Source: the field on the axis of a loop, as in D. J. Griffiths, Introduction to Electrodynamics, example 5.6, doubled;
 * cited from memory.
 */
export const rightFormulas = [
  '2 V (5/4)³ R² / (μ₀ N I r)²',
  '2·V·(5/4)^3·R^2 / (μ0^2·N^2·I^2·r^2)',
  '2 V / ((4/5)^(3/2) μ0 N I r / R)^2',
  '2*V/(r*(4/5)**1.5*µ₀*N*I/R)**2',
  '125 R² V / (32 (μ₀ N I r)²)',
  '125 V R² / (8 (μ₀ N I d)²)',
  '8 V (5/4)^3 (R / (μ0 N I d))^2',
  '2 V / (μ0 N I / R)² / (d/2)² · 1.953125',
  '2 V × 1.25³ × R² ÷ (μ0 N I r)²',
  '(sqrt(2 V) R / (μ0 N I r) · √((5/4)³))²',
  '2 V (R² + s²/4)³ / (μ0 N I R² r)²',
  '2 V (R² + (s/2)²)^3 / (μ0 N I R^2 r)^2',
  '8 V ((R² + s²/4)^(3/2) / (μ0 N I R² d))²',
  'V (4 R² + s²)³ / (32 μ0² N² I² R⁴ r²)',
  '2 V R² (1 + (s/(2R))²)³ / (μ0 N I r)²',
  '--2 V (5/4)³ R² (μ0 N I r)^-2',
  '0.5 V (5/4)³ (2 R)² / (μ₀ N I r)²',
  'exp(ln(2)) V (5/4)³ R² / (μ₀ N I r)²',
]
