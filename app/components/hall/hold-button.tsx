import { useEffect, useRef, useState } from 'react'

const holdMs = 1_000
const againMs = 3_000

type Props = { children: React.ReactNode; onHeld: () => void; describedBy?: string }

/**
 * A button that acts when it has been held for a second, or when it is pressed twice within three seconds by keyboard:
 * nobody takes a whole room down with an elbow.
 */
export function HoldButton({ children, onHeld, describedBy }: Props) {
  const [stage, setStage] = useState<'idle' | 'held' | 'once'>('idle')
  const timer = useRef<ReturnType<typeof setTimeout>>(undefined)
  useEffect(() => () => clearTimeout(timer.current), [])

  function begin(next: 'held' | 'once', ms: number, then: () => void) {
    clearTimeout(timer.current)
    setStage(next)
    timer.current = setTimeout(() => {
      setStage('idle')
      then()
    }, ms)
  }
  function cancel() {
    clearTimeout(timer.current)
    setStage('idle')
  }
  function pressKey() {
    if (stage !== 'once') return begin('once', againMs, () => {})
    cancel()
    onHeld()
  }

  return (
    <button
      type="button"
      className="button button-safe relative overflow-hidden select-none touch-none"
      aria-describedby={describedBy}
      onPointerDown={(event) => event.button === 0 && begin('held', holdMs, onHeld)}
      onPointerUp={() => stage === 'held' && cancel()}
      onPointerLeave={() => stage === 'held' && cancel()}
      onContextMenu={(event) => event.preventDefault()}
      // A click with no pointer behind it comes from the keyboard or from assistive technology.
      onClick={(event) => event.detail === 0 && pressKey()}
    >
      <span
        aria-hidden="true"
        className={`absolute inset-0 origin-left bg-trip opacity-30 ${stage === 'held' ? 'scale-x-100 transition-transform duration-1000 ease-linear' : 'scale-x-0'}`}
      />
      <span className="relative" aria-live="polite">
        {stage === 'once' ? 'Press again' : children}
      </span>
    </button>
  )
}
