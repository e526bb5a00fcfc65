import { useEffect, useState } from 'react'
import type { ActionReply } from '#app/benches/action-reply.ts'

type Props = {
  reply: ActionReply | undefined
  /** Fields whose errors stand beside them already. */
  fields?: string[]
  className?: string
}

const answerMilliseconds = 10_000

/** What the bench answered: done, or refused with the limit, whose it is and by how much. */
export function AnswerLine({ reply, fields = [], className }: Props) {
  const isFresh = useFreshness(reply)
  const problems = reply && !reply.ok ? problemsOf(reply, fields) : []
  const answer = reply?.ok && isFresh ? reply.answer : ''
  // Empty it takes no room, and still stands there for whoever is told of changes.
  return (
    <div className={answer || problems.length > 0 ? className : 'sr-only'}>
      <p role="status">{answer}</p>
      <div role="alert">
        {problems.map((sentence) => (
          <p key={sentence} className="font-medium text-trip">
            {sentence}
          </p>
        ))}
      </div>
    </div>
  )
}

/** Whether a reply has just come: what was done is said for a while, what was refused until it is asked anew. */
function useFreshness(reply: ActionReply | undefined): boolean {
  const [faded, setFaded] = useState<ActionReply | null>(null)
  useEffect(() => {
    if (!reply) return
    const timer = setTimeout(() => setFaded(reply), answerMilliseconds)
    return () => clearTimeout(timer)
  }, [reply])
  return faded !== reply
}

function problemsOf(reply: Extract<ActionReply, { ok: false }>, fields: string[]): string[] {
  const others = Object.entries(reply.errors).filter(([field]) => !fields.includes(field))
  return [...reply.refusals.map(({ sentence }) => sentence), ...others.flatMap(([, errors]) => errors)]
}
