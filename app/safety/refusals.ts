import { interlockChain } from './chain.ts'
import {
  refusalsToHandOver,
  refusalsToOperate,
  refusalsToTake,
  refusalsToTakeOver,
  refusalsUnlessHolder,
} from './controls.ts'
import { refusalsToReset } from './reset.ts'
import type { Actor, Contact, ContactName, Polarity, Refusal, RefusalCode, Role, Trip } from './types.ts'
import { type BenchView, heaterInBand } from './view.ts'
import type { WarmUp } from './warm-up.ts'
import { capital, inAmps, inVolts } from './words.ts'

/** What may be asked of one bench. The protocol's commands have this shape. */
export type SafetyCommand =
  | { kind: 'take-controls' }
  | { kind: 'take-over' }
  | { kind: 'hand-over'; toPersonId: string; toName: string; toRole: Role; toAcknowledged: boolean }
  | { kind: 'release-controls' }
  | { kind: 'switch-heater'; on: boolean }
  | { kind: 'set-anode'; volts: number | null }
  | { kind: 'set-coils'; amps: number | null }
  | { kind: 'set-polarity'; polarity: Polarity }
  | { kind: 'reset-trip' }
  | { kind: 'make-safe' }

export type Asked = {
  view: BenchView
  warmUp: WarmUp
  trip: Trip | null
  actor: Actor
  command: SafetyCommand
}

/** Every reason why the command is not carried out, each with its sentence; empty when it is. */
export function refusalsFor(asked: Asked): Refusal[] {
  const { view, actor, command, trip } = asked
  switch (command.kind) {
    case 'make-safe':
      return actor.role === 'guest'
        ? [{ code: 'not-permitted', sentence: 'A guest of a demonstration may watch only.' }]
        : []
    case 'take-controls':
      return refusalsToTake(view.holder, actor)
    case 'take-over':
      return refusalsToTakeOver(actor)
    case 'release-controls':
      return refusalsUnlessHolder(view.holder, actor)
    case 'hand-over':
      return refusalsToHandOver(view.holder, actor, {
        personId: command.toPersonId,
        name: command.toName,
        role: command.toRole,
        acknowledged: command.toAcknowledged,
      })
    case 'reset-trip':
      return refusalsToReset(view, asked.warmUp, trip, actor)
    case 'switch-heater':
      return command.on ? heaterOn(asked) : refusalsUnlessHolder(view.holder, actor)
    case 'set-anode':
      return setAnode(asked, command.volts)
    case 'set-coils':
      return setCoils(asked, command.amps)
    case 'set-polarity':
      return setPolarity(asked)
  }
}

const codeOfContact: Record<Exclude<ContactName, 'controls'>, RefusalCode> = {
  commissioned: 'not-configured',
  'e-stop': 'e-stop-in',
  enclosure: 'enclosure-open',
  'warm-up': 'not-warmed-up',
  heater: 'heater-out-of-band',
  'coil-temperature': 'coil-temperature',
  signal: 'signal-stale',
  'read-back': 'read-back',
  'no-trip': 'tripped',
}

function refusalOf({ view }: Asked, { name, reason }: Contact): Refusal {
  const sentence = reason ?? 'A contact of the interlock chain is open.'
  if (name === 'controls') return { code: 'not-at-the-controls', sentence }
  if (name === 'signal' && (view.lostLines.length > 0 || !view.prepared))
    return { code: 'line-lost', sentence }
  if ((name === 'warm-up' || name === 'heater') && !view.outputs.heater.on) {
    return { code: 'heater-off', sentence }
  }
  return { code: codeOfContact[name], sentence }
}

/** The open contacts among those named, as refusals, one a code. The controls are judged by the person who asks. */
function openContacts(asked: Asked, names?: readonly ContactName[]): Refusal[] {
  const chain = interlockChain(asked.view, asked.warmUp, asked.trip)
  if (asked.view.config === null) return chain.slice(0, 1).map((link) => refusalOf(asked, link))
  const refusals: Refusal[] = []
  for (const link of chain) {
    if (link.closed || link.name === 'controls' || (names && !names.includes(link.name))) continue
    const refusal = refusalOf(asked, link)
    if (!refusals.some(({ code }) => code === refusal.code)) refusals.push(refusal)
  }
  return refusals
}

const polarityBusy = (view: BenchView): Refusal[] =>
  view.polarityChanging
    ? [
        {
          code: 'polarity-changing',
          sentence: 'The coil polarity is being changed: wait until the coils have been read as zero.',
        },
      ]
    : []

function heaterOn(asked: Asked): Refusal[] {
  return [
    ...refusalsToOperate(asked.view.holder, asked.actor),
    ...openContacts(asked, ['commissioned', 'e-stop', 'signal', 'no-trip']),
  ]
}

type Bound = { what: string; limit: number; range: number; inUnits: (value: number) => string }

/** Refusals of a number by itself: none, below zero, above the bench's limit, above the instrument's range. */
function outOfBounds(value: number | null, bound: Bound): Refusal[] {
  const { what, limit, range, inUnits } = bound
  if (value === null || !Number.isFinite(value)) {
    return [{ code: 'not-a-number', sentence: `${capital(what)} must be a number.` }]
  }
  if (value < 0) {
    return [
      {
        code: 'below-zero',
        sentence: `${inUnits(value)} is below zero by ${inUnits(-value)}: the ${what} starts at zero.`,
      },
    ]
  }
  const refusals: Refusal[] = []
  if (value > limit) {
    refusals.push({
      code: 'above-limit',
      sentence: `${inUnits(value)} is ${inUnits(value - limit)} above this bench's limit of ${inUnits(limit)}, set at commissioning.`,
    })
  }
  if (value > range) {
    refusals.push({
      code: 'above-range',
      sentence: `${inUnits(value)} is ${inUnits(value - range)} above the supply's range of ${inUnits(range)}.`,
    })
  }
  return refusals
}

function setAnode(asked: Asked, volts: number | null): Refusal[] {
  const { view, actor } = asked
  const bounds = view.config
    ? outOfBounds(volts, {
        what: 'anode voltage',
        limit: view.config.limits.anodeVolts,
        range: view.config.ranges.anodeVolts,
        inUnits: inVolts,
      })
    : []
  if (volts === 0) return refusalsUnlessHolder(view.holder, actor)
  return [
    ...bounds,
    ...refusalsToOperate(view.holder, actor),
    ...openContacts(asked),
    ...heaterNow(asked),
    ...polarityBusy(view),
  ]
}

/** With the anode on, the chain waits for a fault to be confirmed; a higher voltage does not. */
function heaterNow({ view }: Asked): Refusal[] {
  if (view.config === null || !view.outputs.anode.on) return []
  return heaterInBand(view.values, view.config.limits.heaterVolts) === true
    ? []
    : [
        {
          code: 'heater-out-of-band',
          sentence: 'The heater is out of its band at this moment: wait until it is back.',
        },
      ]
}

/** The enclosure's contact interrupts the coils as well as the anode. */
const coilContacts: ContactName[] = [
  'commissioned',
  'e-stop',
  'enclosure',
  'coil-temperature',
  'signal',
  'no-trip',
]

function setCoils(asked: Asked, amps: number | null): Refusal[] {
  const { view, actor } = asked
  if (amps === 0) return refusalsUnlessHolder(view.holder, actor)
  const bounds = view.config
    ? outOfBounds(amps, {
        what: 'coil current',
        limit: view.config.limits.coilAmps,
        range: view.config.ranges.coilAmps,
        inUnits: inAmps,
      })
    : []
  return [
    ...bounds,
    ...refusalsToOperate(view.holder, actor),
    ...openContacts(asked, coilContacts),
    ...polarityBusy(view),
  ]
}

function setPolarity(asked: Asked): Refusal[] {
  const { view, actor } = asked
  const fixed: Refusal[] =
    view.config !== null && !view.config.coilsReversible
      ? [
          {
            code: 'polarity-fixed',
            sentence: 'The coil current of this bench cannot be reversed: it was commissioned so.',
          },
        ]
      : []
  return [
    ...fixed,
    ...refusalsToOperate(view.holder, actor),
    ...openContacts(asked, coilContacts),
    ...polarityBusy(view),
  ]
}
