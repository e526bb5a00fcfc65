import { useEffect } from 'react'
import { useBenchState, useMakeSafe } from '#app/telemetry/telemetry.tsx'

type Props = {
  benchId: string
  person: { id: string; role: string }
}

/**
 * Make safe for one bench. Always enabled. Escape does the same at once, without a question and also over an open dialog
 * (which closes by itself), for the person at the controls and for staff; others have the button only.
 */
export function MakeSafeButton({ benchId, person }: Props) {
  const makeSafe = useMakeSafe()
  const isAtControls = useBenchState(benchId)?.controls?.personId === person.id
  const hasEscape = isAtControls || person.role === 'technician' || person.role === 'instructor'

  useEffect(() => {
    if (!hasEscape) return
    const onKey = (event: KeyboardEvent) => {
      if (event.key === 'Escape' && !event.repeat) makeSafe(benchId)
    }
    // Captured on the window, before a dialog or a field can keep the key to itself.
    window.addEventListener('keydown', onKey, { capture: true })
    return () => window.removeEventListener('keydown', onKey, { capture: true })
  }, [hasEscape, makeSafe, benchId])

  return (
    <button
      type="button"
      onClick={() => makeSafe(benchId)}
      className="button button-safe"
      aria-keyshortcuts={hasEscape ? 'Escape' : undefined}
    >
      Make safe
      {hasEscape && (
        <span aria-hidden="true" className="max-sm:hidden">
          &nbsp;Esc
        </span>
      )}
    </button>
  )
}
