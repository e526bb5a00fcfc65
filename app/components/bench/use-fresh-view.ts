import { useEffect } from 'react'
import { useRevalidator } from 'react-router'

const refreshMilliseconds = 8000

/**
 * Reads the page's data anew every few seconds while it is looked at: others capture, read edges and strike as well.
 * Asks first whether the web application answers, since a failed reload would take the page away.
 */
export function useFreshView(): void {
  const { revalidate, state } = useRevalidator()
  useEffect(() => {
    if (state !== 'idle') return
    const timer = setInterval(async () => {
      if (document.visibilityState !== 'visible') return
      const health = await fetch('/api/health').catch(() => null)
      if (health?.ok) await revalidate()
    }, refreshMilliseconds)
    return () => clearInterval(timer)
  }, [state, revalidate])
}
