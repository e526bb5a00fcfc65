import { type Command, findCommand } from './commands.ts'
import { commonCommands, requiredCommands } from './common-commands.ts'
import { ScpiError } from './errors.ts'
import { Parameters } from './parameters.ts'
import { parseUnit, splitOutside, type Unit } from './parse-unit.ts'
import { Status } from './status.ts'

export type DeviceOptions = {
  identity: readonly [string, string, string, string]
  commands: (status: Status) => Command[]
  /** Called before every message, to bring the instrument up to the present. */
  beforeMessage?: (status: Status) => void
  /** Called after every message that was free of command errors. */
  afterWellFormed?: () => void
  reset?: () => void
}

const lookupLimit = 256

/**
 * An instrument's message exchange after IEEE 488.2: program messages in, response messages out.
 * On a serial line the answer leaves as soon as it is there, so the two query errors of reading too late (-410) and
 * of reading with nothing asked (-420) arise only where `read` is left to a controller.
 */
export class ScpiDevice {
  readonly status = new Status()
  readonly #common: Command[]
  readonly #commands: Command[]
  readonly #options: DeviceOptions
  readonly #lookups = new Map<string, ReturnType<typeof findCommand>>()
  #answer: string | null = null

  constructor(options: DeviceOptions) {
    this.#options = options
    this.#common = commonCommands({
      status: this.status,
      identity: options.identity,
      messageAvailable: () => this.#answer !== null,
      reset: () => options.reset?.(),
    })
    this.#commands = [...requiredCommands(this.status), ...options.commands(this.status)]
  }

  /** All headers that the instrument knows, in SCPI notation. */
  get headers(): string[] {
    return [...this.#common.map(({ header }) => `*${header}`), ...this.#commands.map(({ header }) => header)]
  }

  get hasAnswer(): boolean {
    return this.#answer !== null
  }

  /** Carries out one program message, without its terminator. */
  write(message: string): void {
    this.#options.beforeMessage?.(this.status)
    if (this.#answer !== null) {
      this.#answer = null
      this.status.report(-410)
    }
    if (message.trim() === '') return
    if (this.#carryOut(message)) this.#options.afterWellFormed?.()
  }

  /** Takes the response message; null, with -420 reported, when there is none. */
  read(): string | null {
    const answer = this.#answer
    this.#answer = null
    if (answer === null) this.status.report(-420)
    return answer
  }

  #carryOut(message: string): boolean {
    let path: string[] = []
    let isAfterIndefinite = false
    try {
      for (const text of splitOutside(message, ';')) {
        const unit = parseUnit(text)
        if (isAfterIndefinite && unit.isQuery) {
          this.status.report(-440)
          return true
        }
        const mnemonics = unit.isCommon || unit.isRooted ? unit.mnemonics : [...path, ...unit.mnemonics]
        if (!unit.isCommon) path = mnemonics.slice(0, -1)
        this.#execute(unit, mnemonics)
        isAfterIndefinite ||= unit.isCommon && unit.isQuery && mnemonics[0] === 'IDN'
      }
      return true
    } catch (error) {
      // A command error ends the message: what follows it can no longer be trusted.
      if (!(error instanceof ScpiError)) throw error
      this.status.report(error.code, error.detail)
      return false
    }
  }

  #execute(unit: Unit, mnemonics: string[]): void {
    const found = this.#lookUp(unit, mnemonics)
    if (!found) throw new ScpiError(-113)
    try {
      const answer = found.command.execute(new Parameters(unit.parameters), found.suffix)
      if (answer !== undefined) this.#answer = this.#answer === null ? answer : `${this.#answer};${answer}`
    } catch (error) {
      if (!(error instanceof ScpiError) || error.isCommandError) throw error
      this.status.report(error.code, error.detail)
    }
  }

  #lookUp(unit: Unit, mnemonics: string[]): ReturnType<typeof findCommand> {
    const key = `${unit.isCommon ? '*' : ''}${mnemonics.join(':')}${unit.isQuery ? '?' : ''}`
    const known = this.#lookups.get(key)
    if (known !== undefined) return known
    const found = findCommand(unit.isCommon ? this.#common : this.#commands, mnemonics, unit.isQuery)
    if (this.#lookups.size < lookupLimit) this.#lookups.set(key, found)
    return found
  }
}
