import { type Command, command, nothing } from './commands.ts'
import type { Parameters } from './parameters.ts'
import type { ConditionRegister, Status } from './status.ts'

/** What an instrument adds to the commands that all of them have. */
export type CommonOptions = {
  status: Status
  /** Maker, model, serial number, firmware. */
  identity: readonly [string, string, string, string]
  messageAvailable: () => boolean
  reset: () => void
}

const register8 = (parameters: Parameters) => parameters.whole({ minimum: 0, maximum: 255 })
const register16 = (parameters: Parameters) => parameters.whole({ minimum: 0, maximum: 65_535 })

/** The mandatory common commands of IEEE 488.2, without their asterisk. All commands here finish before the next starts. */
export function commonCommands({ status, identity, messageAvailable, reset }: CommonOptions): Command[] {
  return [
    command('CLS', nothing, () => {
      status.clear()
      return undefined
    }),
    command('ESE', register8, (value) => {
      status.eventEnable = value
      return undefined
    }),
    command('ESE?', nothing, () => String(status.eventEnable)),
    command('ESR?', nothing, () => String(status.takeEvent())),
    command('IDN?', nothing, () => identity.join(',')),
    command('OPC', nothing, () => {
      status.completeOperation()
      return undefined
    }),
    command('OPC?', nothing, () => '1'),
    command('RST', nothing, () => {
      reset()
      return undefined
    }),
    command('SRE', register8, (value) => {
      status.requestEnable = value & ~64
      return undefined
    }),
    command('SRE?', nothing, () => String(status.requestEnable)),
    command('STB?', nothing, () => String(status.byte(messageAvailable()))),
    command('TST?', nothing, () => '0'),
    command('WAI', nothing, nothing),
  ]
}

/** The headers that SCPI-1999 requires of every instrument. */
export function requiredCommands(status: Status): Command[] {
  return [
    command('SYSTem:ERRor[:NEXT]?', nothing, () => status.errors.next()),
    command('SYSTem:ERRor:COUNt?', nothing, () => String(status.errors.length)),
    command('SYSTem:VERSion?', nothing, () => '1999.0'),
    ...registerCommands('STATus:OPERation', status.operation),
    ...registerCommands('STATus:QUEStionable', status.questionable),
    command('STATus:PRESet', nothing, () => {
      status.preset()
      return undefined
    }),
  ]
}

function registerCommands(root: string, register: ConditionRegister): Command[] {
  return [
    command(`${root}[:EVENt]?`, nothing, () => String(register.takeEvent())),
    command(`${root}:CONDition?`, nothing, () => String(register.condition)),
    command(`${root}:ENABle?`, nothing, () => String(register.enable)),
    command(`${root}:ENABle`, register16, (value) => {
      register.enable = value & 0x7fff
      return undefined
    }),
  ]
}
