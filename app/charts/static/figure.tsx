import { useRef } from 'react'
import { savePng, saveSvg } from './save-picture.ts'

type Props = {
  /** Said in full to who does not see the plot. */
  description: string
  caption: React.ReactNode
  width: number
  height: number
  /** Name of the saved file, without its ending. */
  fileName: string
  /** The numbers of the plot. */
  table: React.ReactNode
  children: React.ReactNode
  onPoint?: (at: { x: number; y: number }) => void
}

/** A plot as a static SVG, with its caption, its numbers as a table, and the picture as a file. */
export function Figure({ description, caption, width, height, fileName, table, children, onPoint }: Props) {
  const svg = useRef<SVGSVGElement>(null)
  const save = (how: typeof saveSvg | typeof savePng) => () => svg.current && how(svg.current, fileName)
  return (
    <figure className="grid min-w-0 grid-cols-1 content-start gap-1">
      <svg
        ref={svg}
        viewBox={`0 0 ${width} ${height}`}
        role="img"
        aria-label={description}
        className="h-auto w-full max-w-[760px] text-[12px] select-none"
        onPointerMove={
          onPoint &&
          ((event) => {
            const box = event.currentTarget.getBoundingClientRect()
            const scale = width / box.width
            onPoint({ x: (event.clientX - box.left) * scale, y: (event.clientY - box.top) * scale })
          })
        }
      >
        {children}
      </svg>
      <figcaption className="max-w-prose text-[12.5px] text-ink-soft">{caption}</figcaption>
      <div className="flex flex-wrap items-start gap-x-5 gap-y-1 text-[12.5px] text-ink-soft">
        <details className="min-w-0 open:w-full">
          <summary className="w-fit cursor-pointer touch:py-3.5">as a table</summary>
          {/* biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reached by keyboard */}
          <section aria-label="Numbers of the plot" tabIndex={0} className="overflow-x-auto py-1">
            {table}
          </section>
        </details>
        <button type="button" className="link-alone" onClick={save(saveSvg)}>
          save as SVG
        </button>
        <button type="button" className="link-alone" onClick={save(savePng)}>
          save as PNG
        </button>
      </div>
    </figure>
  )
}
