import { useSyncExternalStore } from 'react'

type Parts = 'time' | 'date and time' | 'date and seconds'

const never = () => () => {}

/** A moment on this browser's clock; until the page has its script, and without one, in UTC and so marked. */
export function LocalTime({ iso, parts, className }: { iso: string; parts: Parts; className?: string }) {
  const isOnServer = useSyncExternalStore(
    never,
    () => false,
    () => true,
  )
  return (
    <time dateTime={iso} className={className}>
      {isOnServer ? `${shorten(iso, parts)} UTC` : shorten(localIso(new Date(iso)), parts)}
    </time>
  )
}

/** As an ISO text, but by the clock of this machine. */
function localIso(date: Date): string {
  return new Date(date.getTime() - date.getTimezoneOffset() * 60_000).toISOString()
}

function shorten(iso: string, parts: Parts): string {
  if (parts === 'time') return iso.slice(11, 19)
  return `${iso.slice(0, 10)} ${iso.slice(11, parts === 'date and time' ? 16 : 19)}`
}
