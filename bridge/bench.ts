import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { Capture, Command, CommandReply } from '#app/protocol/commands.ts'
import type { BenchEvent, BenchState } from '#app/protocol/messages.ts'
import { refusalsFor } from '#app/safety/refusals.ts'
import type { Actor, Refusal } from '#app/safety/types.ts'
import type { BenchView } from '#app/safety/view.ts'
import { Apparatus, lineWords } from './apparatus.ts'
import type { Bus } from './bus.ts'
import { captureFrom } from './capture.ts'
import type { Clock } from './clock.ts'
import { bringsUp, execute, refusalOfError } from './commands.ts'
import { Controls } from './controls.ts'
import { Guard, type Report } from './guard.ts'
import { lostLines } from './instrument-set.ts'
import type { OpenPort } from './instruments/open-port.ts'
import type { Log } from './log.ts'
import { noValues } from './poll.ts'
import type { UnnumberedSummary } from './recorder.ts'
import { prepareSupply } from './start.ts'
import { benchState } from './state.ts'

const tickSeconds = 0.05
const stateSeconds = 0.25
const quietStateSeconds = 1

export type NewEvent = Omit<BenchEvent, 'sequence'>
export type BenchOptions = {
  benchId: string
  openPort: OpenPort
  clock: Clock
  presenceClock: Clock
  wallOf: (at: number) => number
  bus: Bus
  log: Log
  onEvent: (event: NewEvent) => void
  onSummaries: (summaries: UnnumberedSummary[]) => void
}

const askedBefore: Refusal = {
  code: 'busy',
  sentence: 'The outputs were taken down after this was asked: see why, then ask again.',
}

const off = { on: false, asked: 0, commanded: 0, changedAt: 0 }

/** One bench: keeps its apparatus, judges it on every sample and every tick, and carries out what is permitted. */
export class Bench {
  readonly benchId: string
  readonly controls: Controls
  readonly #options: BenchOptions
  readonly #guard: Guard
  readonly #timer: NodeJS.Timeout
  #apparatus: Apparatus | null = null
  #pending: BenchConfig | null | undefined
  #isConfiguring = false
  #isEnding = false
  #turn: Promise<unknown> = Promise.resolve()
  #stateAt = Number.NEGATIVE_INFINITY
  #isChanged = true
  #isUrgent = false

  constructor(options: BenchOptions) {
    this.benchId = options.benchId
    this.#options = options
    this.controls = new Controls(options.clock, options.presenceClock)
    this.#guard = new Guard(
      {
        view: () => this.view(),
        apparatus: () => this.#apparatus,
        controls: this.controls,
        wallOf: options.wallOf,
        report: (report) => this.report(report),
        onUrgent: () => this.changed(true),
      },
      options.clock.now(),
    )
    this.#timer = setInterval(() => this.#tick(), tickSeconds * 1000)
  }

  get apparatus(): Apparatus | null {
    return this.#apparatus
  }

  get machine(): Guard['machine'] {
    return this.#guard.machine
  }

  /** The configuration last asked for; a changed revision is only applied with every output off. */
  configure(config: BenchConfig | null): void {
    this.#pending = config
    this.#tick()
  }

  view(): BenchView {
    const at = this.#options.clock.now()
    const apparatus = this.#apparatus
    return {
      at,
      config: apparatus?.safety ?? null,
      lostLines: lostLines(apparatus?.instruments ?? null),
      prepared: apparatus?.prepared ?? false,
      values: apparatus?.values ?? noValues(),
      lastGoodAt: apparatus?.lastGoodAt ?? noValues(),
      interlock: apparatus?.interlock ?? null,
      interlockAt: apparatus?.interlockAt ?? null,
      outputs: apparatus?.outputs.views ?? { heater: off, anode: off, coils: off },
      polarityChanging: apparatus?.outputs.polarityChanging ?? false,
      holder: this.controls.holder,
    }
  }

  state(): BenchState {
    return benchState({
      benchId: this.benchId,
      machine: this.machine,
      view: this.view(),
      apparatus: this.#apparatus,
      controls: this.controls,
      shutdown: this.#guard.shutdown,
      wallOf: this.#options.wallOf,
      notes: this.#hasPendingChange() ? ['A changed configuration waits until every output is off.'] : [],
    })
  }

  /** Carries out a command, or says why not. One at a time, but for make safe, which waits for nothing. */
  command(actor: Actor, command: Command): Promise<CommandReply> {
    const { takeDowns } = this.#guard
    if (command.kind === 'make-safe') return this.#decide(actor, command, takeDowns)
    const run = this.#turn.then(() => this.#decide(actor, command, takeDowns))
    this.#turn = run.catch(() => undefined)
    return run
  }

  /** Nothing is switched on any more. */
  end(): void {
    this.#isEnding = true
  }

  /** `takeDowns` as they were when it was asked. */
  async #decide(actor: Actor, command: Command, takeDowns: number): Promise<CommandReply> {
    this.controls.noteCommand(actor)
    this.#guard.evaluate()
    const view = this.view()
    const { warmUp, trip } = this.machine
    let refusals = refusalsFor({ view, warmUp, trip, actor, command })
    if (bringsUp(command)) {
      if (this.#isEnding) refusals.push({ code: 'busy', sentence: 'The bridge is being stopped.' })
      else if (takeDowns !== this.#guard.takeDowns) refusals.push(askedBefore)
    }
    let answer = ''
    if (refusals.length === 0) {
      try {
        answer = await execute(this, actor, command)
      } catch (error) {
        refusals = [refusalOfError(error)]
        this.#options.log.warn({ bench: this.benchId, error: String(error) }, 'A command failed')
      }
    }
    if (refusals.length > 0) this.reportRefusal(actor, command.kind, refusals, { command })
    this.#guard.evaluate()
    this.changed(true)
    return { accepted: refusals.length === 0, refusals, answer, state: this.state() }
  }

  /** A settled window, or why there is none. */
  capture(actor: Actor): { capture: Capture } | { refusals: Refusal[] } {
    this.controls.noteCommand(actor)
    const taken = captureFrom({
      apparatus: this.#apparatus,
      machine: this.machine,
      holder: this.controls.holder,
      actor,
      now: this.#options.clock.now(),
      wallOf: this.#options.wallOf,
    })
    if ('refusals' in taken) this.reportRefusal(actor, 'capture', taken.refusals, {})
    return taken
  }

  makeSafe(cause: string, actor?: Pick<Actor, 'personId' | 'name'>): Promise<string> {
    return this.#guard.makeSafe(cause, actor)
  }

  reset(): void {
    this.#guard.reset()
  }

  report({ kind, sentence, actor, data }: Report): void {
    this.#options.onEvent({
      benchId: this.benchId,
      at: this.#options.wallOf(this.#options.clock.now()),
      kind,
      personId: actor?.personId ?? null,
      personName: actor?.name ?? null,
      sentence,
      data: data ?? {},
    })
  }

  reportRefusal(
    actor: Actor,
    what: string,
    refusals: readonly Refusal[],
    data: Record<string, unknown>,
  ): void {
    this.report({
      kind: 'refusal',
      actor,
      sentence: `Refused (${what}): ${refusals.map(({ sentence }) => sentence).join(' ')}`,
      data: { ...data, codes: refusals.map(({ code }) => code) },
    })
  }

  /** The state is told again soon; at once when it matters. */
  changed(isUrgent = false): void {
    this.#isChanged = true
    this.#isUrgent ||= isUrgent
  }

  async close(): Promise<void> {
    this.#isEnding = true
    clearInterval(this.#timer)
    await this.#apparatus?.close()
  }

  #tick(): void {
    this.#guard.evaluate()
    this.#guard.watchPresence()
    if (this.#pending !== undefined && !this.#isConfiguring) void this.#applyPending()
    const age = this.#options.clock.now() - this.#stateAt
    if (this.#isUrgent || (this.#isChanged && age >= stateSeconds) || age >= quietStateSeconds) this.#tell()
  }

  #tell(): void {
    this.#stateAt = this.#options.clock.now()
    this.#isChanged = false
    this.#isUrgent = false
    this.#options.bus.publish({ type: 'state', state: this.state() })
  }

  #hasPendingChange(): boolean {
    return this.#pending !== undefined && this.#apparatus !== null
  }

  async #applyPending(): Promise<void> {
    const config = this.#pending
    if (config === undefined) return
    if (JSON.stringify(config) === JSON.stringify(this.#apparatus?.config ?? null)) {
      this.#pending = undefined
      return
    }
    if (this.#apparatus?.outputs.anyOn) return
    this.#isConfiguring = true
    try {
      this.#pending = undefined
      const former = this.#apparatus
      this.#apparatus = null
      await former?.close()
      if (config !== null && !this.#isEnding) this.#openApparatus(config)
    } catch (error) {
      this.report({ kind: 'warning', sentence: `The configuration cannot be used: ${String(error)}.` })
    } finally {
      this.#isConfiguring = false
      this.#guard.evaluate()
      this.changed(true)
    }
  }

  #openApparatus(config: BenchConfig): void {
    const apparatus: Apparatus = new Apparatus({
      config,
      openPort: this.#options.openPort,
      clock: this.#options.clock,
      wallOf: this.#options.wallOf,
      onSample: () => {
        this.#guard.evaluate()
        this.changed()
      },
      onSamples: (samples) => this.#options.bus.publish(samples),
      onSecond: this.#options.onSummaries,
      onInterlock: () => this.#guard.evaluate(),
      onChange: () => this.changed(),
      onLine: (instrument, isOpen, reason) => this.#lineChanged(apparatus, instrument, isOpen, reason),
    })
    this.#apparatus = apparatus
    apparatus.open()
  }

  #lineChanged(apparatus: Apparatus, instrument: string, isOpen: boolean, reason: string | null): void {
    const words = lineWords(instrument)
    this.report({
      kind: 'line',
      sentence: isOpen
        ? `The ${words} answers.`
        : `The line to the ${words} is lost${reason === null ? '' : ` (${reason})`}; it is tried again.`,
      data: { instrument, open: isOpen },
    })
    this.#guard.evaluate()
    this.changed(true)
    if (isOpen && instrument === 'supply') {
      void prepareSupply(apparatus, (report) => this.report(report)).then(() => this.changed(true))
    }
  }
}
