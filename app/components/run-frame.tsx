import { BenchFrame } from './bench-frame.tsx'
import { PageFrame } from './page-frame.tsx'
import { RunsLink } from './runs-link.tsx'

type Props = {
  bench: React.ComponentProps<typeof BenchFrame>['bench'] | null
  person: { id: string; role: string }
  children: React.ReactNode
}

/** The frame of a page of a run: its bench's, with make safe; without a bench there is nothing to be commanded. */
export function RunFrame({ bench, person, children }: Props) {
  if (bench)
    return (
      <BenchFrame bench={bench} person={person}>
        {children}
      </BenchFrame>
    )
  return <PageFrame where={<RunsLink />}>{children}</PageFrame>
}
