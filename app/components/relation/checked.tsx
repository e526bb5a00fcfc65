import type { RelationReply, RelationView } from '#app/runs/relation-view.ts'
import { coilsWords } from './coils-words.ts'

/** What the check says: how the formula was read, and that it holds or which kinds of slip are in it. */
export function Checked({ check, coils }: { check: RelationReply['check']; coils: RelationView['coils'] }) {
  return (
    <div role="status" className="grid max-w-prose gap-2">
      {check?.readAs && (
        <p>
          <span className="text-ink-soft">Read as</span>{' '}
          <span className="wrap-anywhere">e/m = {check.readAs}</span>
        </p>
      )}
      {check?.holds && (
        <p>
          <b className="font-medium">It holds:</b> its unit is C/kg, and it agrees with the physics at
          settings drawn by chance. It is kept with your name and the time.{' '}
          {check.isHelmholtz && coilsWords(coils)}
        </p>
      )}
      {check && !check.holds && (
        <>
          <p className="font-medium">{check.readAs ? 'It does not hold yet.' : 'It could not be read.'}</p>
          <ul className="grid list-disc gap-1.5 pl-5">
            {check.findings.map(({ code, sentence }) => (
              <li key={code + sentence}>{sentence}</li>
            ))}
          </ul>
        </>
      )}
    </div>
  )
}
