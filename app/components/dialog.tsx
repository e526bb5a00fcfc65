import { Dialog as Radix } from 'radix-ui'

type Props = {
  isOpen: boolean
  onOpenChange: (isOpen: boolean) => void
  title: string
  children: React.ReactNode
}

/**
 * A dialog that leaves the header alone: make safe stays within reach of pointer and keyboard while it is open.
 * What was typed belongs to the caller, so that closing it loses nothing.
 */
export function Dialog({ isOpen, onOpenChange, title, children }: Props) {
  return (
    <Radix.Root open={isOpen} onOpenChange={onOpenChange} modal={false}>
      <Radix.Portal>
        <div aria-hidden="true" className="fixed inset-0 z-40 bg-ground/70" />
        <Radix.Content
          aria-describedby={undefined}
          onFocusOutside={(event) => event.preventDefault()}
          className="fixed top-24 left-1/2 z-40 grid grid-cols-[minmax(0,1fr)] max-h-[calc(100dvh-8rem)] w-[min(32rem,calc(100vw-1.5rem))] -translate-x-1/2 gap-4 overflow-y-auto rounded-md border border-ink bg-surface p-5"
        >
          <Radix.Title className="text-[17px] font-bold">{title}</Radix.Title>
          {children}
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  )
}

/** Closes the dialog that it stands in. */
export function DialogCancel({ children }: { children: React.ReactNode }) {
  return (
    <Radix.Close type="button" className="button">
      {children}
    </Radix.Close>
  )
}
