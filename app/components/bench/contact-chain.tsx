import { useState } from 'react'
import type { BenchState } from '#app/protocol/messages.ts'
import { contactLabels, foldContacts } from './contact-words.ts'

/** The interlock chain: make contacts in series before the anode. The closed ones that matter less are folded into one. */
export function ContactChain({ contacts }: { contacts: BenchState['contacts'] }) {
  const [isUnfolded, setUnfolded] = useState(false)
  const { drawn, folded } = foldContacts(contacts, isUnfolded)
  return (
    <ul aria-label="Interlock chain" className="flex flex-wrap items-start gap-y-2 pt-1 lg:pt-7">
      {drawn.map((contact) => (
        <li
          key={contact.name}
          className={`w-[72px] text-center text-[11.5px] leading-tight ${contact.closed ? 'text-ink-soft' : 'font-medium text-caution'}`}
        >
          <MakeContact isClosed={contact.closed} />
          <span className="block">{contactLabels[contact.name]}</span>
          <span className="block">{contact.measured}</span>
          <span className="sr-only">{contact.closed ? ', contact closed' : ', contact open'}</span>
        </li>
      ))}
      {contacts.length > 0 && (folded > 0 || isUnfolded) && (
        <li className="w-[72px] text-center text-[11.5px] leading-tight text-ink-soft">
          {folded > 0 && <MakeContact isClosed />}
          <button
            type="button"
            aria-expanded={isUnfolded}
            onClick={() => setUnfolded(!isUnfolded)}
            className={`cursor-pointer underline decoration-edge underline-offset-2 ${folded > 0 ? '' : 'mt-[26px]'}`}
          >
            {folded > 0 ? `${folded} closed` : 'fold'}
          </button>
        </li>
      )}
    </ul>
  )
}

/** Make contact of IEC 60617, on its side, in the run of the line. */
function MakeContact({ isClosed }: { isClosed: boolean }) {
  return (
    <svg
      viewBox="0 0 72 26"
      className="block h-[26px] w-full"
      preserveAspectRatio="none"
      fill="none"
      stroke="currentColor"
      strokeWidth="2"
      strokeLinecap="round"
      aria-hidden="true"
    >
      <path d="M0 18H23M49 18H72" />
      <path d={isClosed ? 'M23 18L49 16' : 'M23 18L45 5'} />
      <circle cx="23" cy="18" r="2.2" fill="currentColor" stroke="none" />
      <circle cx="49" cy="18" r="2.2" fill="currentColor" stroke="none" />
    </svg>
  )
}
