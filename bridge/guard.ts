import type { BenchEvent, BenchState } from '#app/protocol/messages.ts'
import {
  advance,
  type Happening,
  type Machine,
  resetTrip,
  startMachine,
  tripDeadMan,
} from '#app/safety/machine.ts'
import type { Actor, Output } from '#app/safety/types.ts'
import { anyOutputOn, type BenchView } from '#app/safety/view.ts'
import { inSeconds } from '#app/safety/words.ts'
import type { Apparatus } from './apparatus.ts'
import type { Controls } from './controls.ts'
import { clearSetpoints, nothingCommanded, shutDown, shutdownSentence } from './shutdown.ts'

export type Report = {
  kind: BenchEvent['kind']
  sentence: string
  actor?: Pick<Actor, 'personId' | 'name'> | undefined
  data?: Record<string, unknown>
}

type GuardOptions = {
  view: () => BenchView
  apparatus: () => Apparatus | null
  controls: Controls
  wallOf: (at: number) => number
  report: (report: Report) => void
  /** Something happened that the pages must see at once. */
  onUrgent: () => void
}

const everything: readonly Output[] = ['anode', 'coils', 'heater']

/** Drives a bench's state machine and its dead-man, and takes the outputs down when one of them says so. */
export class Guard {
  readonly #options: GuardOptions
  #machine: Machine
  #shutdown: BenchState['shutdown'] = null
  #isWarned = false
  #takeDowns = 0

  constructor(options: GuardOptions, startedAt: number) {
    this.#options = options
    this.#machine = startMachine(startedAt)
  }

  get machine(): Machine {
    return this.#machine
  }

  get shutdown(): BenchState['shutdown'] {
    return this.#shutdown
  }

  /** How often the outputs have been taken down: what was asked before the last time is not carried out after it. */
  get takeDowns(): number {
    return this.#takeDowns
  }

  reset(): void {
    this.#machine = resetTrip(this.#machine)
  }

  /** Judges what is known now. */
  evaluate(): void {
    const view = this.#options.view()
    const { machine, happenings } = advance(this.#machine, view, this.#options.wallOf(view.at))
    this.#machine = machine
    for (const happening of happenings) this.#act(happening)
    if (happenings.length > 0) this.#options.onUrgent()
  }

  /**
   * Commands anode, coils and heater off, whatever the phase. Resolves within a second with what was commanded and
   * measured, in a sentence.
   */
  makeSafe(cause: string, actor?: Pick<Actor, 'personId' | 'name'>): Promise<string> {
    return this.#takeDown(cause, everything, 'make-safe', actor)
  }

  /** The dead-man: warns, and when nobody is there any more, frees the controls and makes safe. */
  watchPresence(): void {
    const { controls, wallOf, report } = this.#options
    const { holder } = controls
    const minutes = this.#options.apparatus()?.config.limits.deadManMinutes
    const seen = minutes === undefined ? null : controls.presence(minutes)
    if (holder === null || minutes === undefined || seen === null) {
      this.#isWarned = false
      return
    }
    const { at } = this.#options.view()
    const left = seen.until - seen.now
    if (seen.warned && !this.#isWarned && seen.lost === null) {
      report({
        kind: 'warning',
        sentence: `${holder.name} has given no sign for a while: without one, make safe follows in ${inSeconds(Math.round(left))}.`,
        data: { until: wallOf(at + left) },
      })
      this.#options.onUrgent()
    }
    this.#isWarned = seen.warned
    if (seen.lost === null) return
    controls.release()
    const { machine, trip } = tripDeadMan(this.#machine, {
      wallAt: wallOf(at),
      name: holder.name,
      lost: seen.lost,
      minutes,
    })
    report({
      kind: 'controls',
      sentence: `${trip.happened} The controls are free.`,
      data: { released: holder.personId },
    })
    if (anyOutputOn(this.#options.view())) {
      this.#machine = machine
      this.#act({ kind: 'trip', trip })
      this.#act({ kind: 'shutdown', cause: trip.happened, heater: true })
    } else {
      // Something may be on its way to being switched on.
      this.#options.apparatus()?.outputs.drop(everything)
    }
    this.#options.onUrgent()
  }

  #act(happening: Happening): void {
    const { report } = this.#options
    switch (happening.kind) {
      case 'trip': {
        const { kind, happened, toDo } = happening.trip
        report({ kind: 'trip', sentence: `${happened} ${toDo}`, data: { trip: kind } })
        break
      }
      case 'shutdown':
        void this.#takeDown(happening.cause, happening.heater ? everything : ['anode', 'coils'], 'command')
        break
      case 'interlock':
        report({
          kind: 'interlock',
          sentence: happening.sentence,
          data: { contact: happening.contact, closed: happening.closed },
        })
        break
      case 'phase':
        report({
          kind: 'phase',
          sentence: `From ${happening.from} to ${happening.to}.`,
          data: { from: happening.from, to: happening.to },
        })
    }
  }

  async #takeDown(
    cause: string,
    order: readonly Output[],
    kind: 'command' | 'make-safe',
    actor?: Pick<Actor, 'personId' | 'name'>,
  ): Promise<string> {
    const { view, wallOf, report } = this.#options
    const apparatus = this.#options.apparatus()
    const at = wallOf(view().at)
    this.#takeDowns++
    apparatus?.outputs.drop(order)
    const supply = apparatus?.instruments.supply ?? null
    const steps = await shutDown(supply, order)
    const views = apparatus?.outputs.views
    // Not when one of them has been switched on again meanwhile.
    if (!views?.anode.on && !views?.coils.on) clearSetpoints(supply)
    this.#shutdown = { at, cause, steps }
    const sentence =
      supply === null
        ? nothingCommanded
        : shutdownSentence(steps, apparatus?.anodeMeasured ?? null, view().at)
    report({ kind, actor, sentence: `${cause} ${sentence}`, data: { steps } })
    this.#options.onUrgent()
    return sentence
  }
}
