import { holderFrom, type Presence, presence } from '#app/safety/controls.ts'
import type { Actor, Role } from '#app/safety/types.ts'
import type { ControlsHolder } from '#app/safety/view.ts'
import type { Clock } from './clock.ts'

type Page = { personId: string; inputAt: number }

/**
 * Who is at the controls of one bench, and which pages on it are connected. Whether a page is there counts by the
 * bridge's clock, input by `presenceClock`, so that a test can let minutes pass.
 */
export class Controls {
  readonly #clock: Clock
  readonly #presenceClock: Clock
  readonly #pages = new Map<string, Page>()
  #holder: ControlsHolder | null = null
  #inputAt = 0
  #pageLastAt = 0

  constructor(clock: Clock, presenceClock: Clock) {
    this.#clock = clock
    this.#presenceClock = presenceClock
  }

  get holder(): ControlsHolder | null {
    return this.#holder
  }

  take(person: { personId: string; name: string; role: Role; acknowledged: boolean }): void {
    this.#holder = holderFrom(person, this.#clock.now())
    this.#inputAt = this.#presenceClock.now()
    this.#pageLastAt = this.#clock.now()
  }

  release(): void {
    this.#holder = null
  }

  /** A signed command of the person at the controls: their word on the cautions, and an input. */
  noteCommand(actor: Actor): void {
    if (this.#holder?.personId !== actor.personId) return
    this.#inputAt = this.#presenceClock.now()
    if (this.#holder.acknowledged !== actor.acknowledged || this.#holder.role !== actor.role) {
      this.#holder = { ...this.#holder, acknowledged: actor.acknowledged, role: actor.role }
    }
  }

  pagePresent(pageId: string, personId: string, hadInput: boolean): void {
    const page = this.#pages.get(pageId) ?? { personId, inputAt: Number.NEGATIVE_INFINITY }
    if (hadInput) {
      page.inputAt = this.#presenceClock.now()
      if (this.#holder?.personId === personId) this.#inputAt = page.inputAt
    }
    this.#pages.set(pageId, page)
  }

  /** A page's socket is gone since `lastHeardAt`. */
  pageGone(pageId: string, lastHeardAt: number): void {
    const page = this.#pages.get(pageId)
    if (!page) return
    this.#pages.delete(pageId)
    if (this.#holder?.personId === page.personId) {
      this.#pageLastAt = Math.max(this.#pageLastAt, lastHeardAt)
    }
  }

  /** Presence of the person at the controls by `presenceClock`; null with nobody there. */
  presence(deadManMinutes: number): (Presence & { now: number }) | null {
    if (this.#holder === null) return null
    const { personId } = this.#holder
    const now = this.#presenceClock.now()
    const seen = presence({
      now,
      pageConnected: [...this.#pages.values()].some((page) => page.personId === personId),
      pageLastAt: now - (this.#clock.now() - this.#pageLastAt),
      inputLastAt: this.#inputAt,
      deadManMinutes,
    })
    return { ...seen, now }
  }
}
