import { useState } from 'react'
import type { BenchState } from '#app/protocol/messages.ts'
import { contactLabels, foldContacts } from './contact-words.ts'

/** The interlock chain: make contacts in series before the anode. The closed ones that matter less are folded into one. */
export function ContactChain({ contacts }: { contacts: BenchState['contacts'] }) {
  const [isUnfolded, setUnfolded] = useState(false)
  const { drawn, folded } = foldContacts(contacts, isUnfolded)
  return (
    <ul
      aria-label="Interlock chain"
      className="grid grid-cols-3 items-start gap-y-2 sm:flex sm:flex-wrap xl:pt-5"
    >
      {drawn.map((contact) => (
        <li
          key={contact.name}
          className={`min-w-16 flex-1 text-center text-[11px] leading-tight ${contact.closed ? 'text-ink-soft' : 'font-medium text-caution'}`}
        >
          <MakeContact isClosed={contact.closed} />
          <span className="block">{contactLabels[contact.name]}</span>
          <span className="block">{contact.measured}</span>
          <span className="sr-only">{contact.closed ? ', contact closed' : ', contact open'}</span>
        </li>
      ))}
      {contacts.length > 0 && (folded > 0 || isUnfolded) && (
        <li className="min-w-16 flex-1 text-center text-[11px] leading-tight text-ink-soft">
          {folded > 0 && <MakeContact isClosed />}
          <button
            type="button"
            aria-expanded={isUnfolded}
            onClick={() => setUnfolded(!isUnfolded)}
            className={`cursor-pointer px-1 underline decoration-edge underline-offset-2 touch:min-h-12 touch:min-w-16 ${folded > 0 ? '' : 'mt-[26px]'}`}
          >
            {folded > 0 ? `${folded} closed` : 'fold'}
          </button>
        </li>
      )}
    </ul>
  )
}

/** Make contact of IEC 60617, on its side, in the run of the line. Its leads run on to the neighbours'. */
export function MakeContact({ isClosed }: { isClosed: boolean }) {
  return (
    <span aria-hidden="true" className="flex h-[26px]">
      <Lead />
      <svg
        width="30"
        height="26"
        viewBox="0 0 30 26"
        fill="none"
        stroke="currentColor"
        strokeWidth="2"
        strokeLinecap="round"
        aria-hidden="true"
      >
        <path d={isClosed ? 'M2 18L28 16' : 'M2 18L24 5'} />
        <circle cx="2.2" cy="18" r="2.2" fill="currentColor" stroke="none" />
        <circle cx="27.8" cy="18" r="2.2" fill="currentColor" stroke="none" />
      </svg>
      <Lead />
    </span>
  )
}

const Lead = () => <span className="mt-[17px] h-0.5 flex-1 bg-current" />
