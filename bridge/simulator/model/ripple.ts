/** Full-wave rectified mains: twice 50 Hz, a little off so that it does not stand still against regular sampling. */
const rippleHertz = 100.13

/** Momentary mains ripple of a quantity after a first-order filter. */
export function ripple(peak: number, filterSeconds: number, atSeconds: number): number {
  if (peak === 0) return 0
  const angular = 2 * Math.PI * rippleHertz
  return (peak * Math.sin(angular * atSeconds)) / Math.hypot(1, angular * filterSeconds)
}
