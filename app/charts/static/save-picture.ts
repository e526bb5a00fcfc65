const pngScale = 3
const properties = ['fill', 'stroke', 'stroke-width', 'stroke-dasharray', 'opacity', 'font-weight'] as const

/** The picture as it stands, in the colours of the room light, free of the page's style sheet. */
function standalone(svg: SVGSVGElement): { text: string; width: number; height: number } {
  const copy = svg.cloneNode(true) as SVGSVGElement
  const { width, height } = svg.viewBox.baseVal
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg')
  copy.setAttribute('width', String(width))
  copy.setAttribute('height', String(height))
  copy.setAttribute('font-family', '"Roboto Mono", monospace')
  copy.setAttribute('font-size', '12')
  const originals = svg.querySelectorAll('*')
  copy.querySelectorAll('*').forEach((element, index) => {
    const original = originals[index]
    if (!original) return
    const style = getComputedStyle(original)
    for (const property of properties) element.setAttribute(property, style.getPropertyValue(property))
    element.removeAttribute('class')
  })
  const ground = document.createElementNS('http://www.w3.org/2000/svg', 'rect')
  ground.setAttribute('width', '100%')
  ground.setAttribute('height', '100%')
  ground.setAttribute('fill', getComputedStyle(document.documentElement).backgroundColor)
  copy.prepend(ground)
  return { text: new XMLSerializer().serializeToString(copy), width, height }
}

function download(blob: Blob, fileName: string): void {
  const link = document.createElement('a')
  link.href = URL.createObjectURL(blob)
  link.download = fileName
  link.click()
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000)
}

export function saveSvg(svg: SVGSVGElement, name: string): void {
  download(new Blob([standalone(svg).text], { type: 'image/svg+xml' }), `${name}.svg`)
}

export async function savePng(svg: SVGSVGElement, name: string): Promise<void> {
  const { text, width, height } = standalone(svg)
  const picture = new Image()
  picture.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(text)}`
  await picture.decode()
  const canvas = document.createElement('canvas')
  canvas.width = width * pngScale
  canvas.height = height * pngScale
  canvas.getContext('2d')?.drawImage(picture, 0, 0, canvas.width, canvas.height)
  const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, 'image/png'))
  if (blob) download(blob, `${name}.png`)
}
