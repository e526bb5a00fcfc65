import { href, Link } from 'react-router'
import { cautions, cautionsLimits } from '#app/benches/cautions.ts'

/** The cautions, one glance away while one works. */
export function CautionsGlance({ benchId }: { benchId: string }) {
  return (
    <section aria-labelledby="cautions" className="min-w-0">
      <h2 id="cautions" className="mb-1 flex flex-wrap justify-between gap-3">
        <span className="font-medium">Cautions</span>
        <Link to={href('/benches/:benchId/cautions', { benchId })} className="link-alone text-ink-soft">
          in full
        </Link>
      </h2>
      <ul className="text-[12.5px]">
        {cautions.map(({ title }) => (
          <li key={title} className="border-b border-rule py-1">
            {title}
          </li>
        ))}
      </ul>
      <p className="pt-2 text-[12.5px] text-ink-soft">{cautionsLimits}</p>
    </section>
  )
}
