type Draw = () => void

const drawers = new Set<Draw>()
let frame = 0

function run(): void {
  for (const draw of drawers) draw()
  frame = requestAnimationFrame(run)
}

/** Calls `draw` on every animation frame, all plots in one loop. Returns the function that ends it. */
export function drawEachFrame(draw: Draw): () => void {
  drawers.add(draw)
  if (drawers.size === 1) frame = requestAnimationFrame(run)
  return () => {
    drawers.delete(draw)
    if (drawers.size === 0) cancelAnimationFrame(frame)
  }
}
