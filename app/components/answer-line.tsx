import type { ActionReply } from '#app/benches/action-reply.ts'

type Props = {
  reply: ActionReply | undefined
  /** Fields whose errors stand beside them already. */
  fields?: string[]
  className?: string
}

/** What the bench answered: done, or refused with the limit, whose it is and by how much. */
export function AnswerLine({ reply, fields = [], className }: Props) {
  const problems = reply && !reply.ok ? problemsOf(reply, fields) : []
  return (
    <div className={className}>
      <p role="status">{reply?.ok ? reply.answer : ''}</p>
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

function problemsOf(reply: Extract<ActionReply, { ok: false }>, fields: string[]): string[] {
  const others = Object.entries(reply.errors).filter(([field]) => !fields.includes(field))
  return [...reply.refusals.map(({ sentence }) => sentence), ...others.flatMap(([, errors]) => errors)]
}
