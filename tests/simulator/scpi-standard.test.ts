import { beforeEach, describe, expect, it } from 'vitest'
import { command, nothing } from '#bridge/simulator/scpi/commands.ts'
import { ScpiDevice } from '#bridge/simulator/scpi/device.ts'
import { errorText, eventBitOf, eventBits, ScpiError, scpiErrors } from '#bridge/simulator/scpi/errors.ts'
import { specialNumbers } from '#bridge/simulator/scpi/parameters.ts'
import { ErrorQueue, statusBits } from '#bridge/simulator/scpi/status.ts'
import {
  errorClasses,
  errorNumbers,
  eventStatusBits,
  mandatoryCommonCommands,
  noError,
  requiredHeaders,
  statusByteBits,
} from './scpi-check-values.ts'
import { createWorkbench, type Workbench } from './workbench.ts'

describe('error numbers of SCPI-1999 volume 2, chapter 21', () => {
  it('has the 120 numbers of the standard and no other', () => {
    expect(errorNumbers).toHaveLength(120)
    expect([...scpiErrors.keys()]).toEqual(errorNumbers.map(([code]) => code))
  })

  it.each(errorNumbers)('calls %i "%s"', (code, text) => {
    expect(errorText(code)).toBe(`${code},"${text}"`)
  })

  it('says no error as 0,"No error"', () => {
    expect(errorText(0)).toBe(noError)
  })

  it('puts a detail behind a semicolon inside the quotes', () => {
    expect(errorText(-221, 'interlock open')).toBe('-221,"Settings conflict;interlock open"')
  })
})

describe('error classes of SCPI-1999 volume 2, chapter 21.8', () => {
  it.each(errorClasses)('sets event bit $bit for a $name', ({ range: [low, high], bit }) => {
    expect(eventBitOf(low)).toBe(2 ** bit)
    expect(eventBitOf(high)).toBe(2 ** bit)
    for (const [code] of errorNumbers) {
      if (code >= low && code <= high) expect(eventBitOf(code)).toBe(2 ** bit)
    }
  })
})

describe('status bits', () => {
  it('has the event bits of IEEE 488.2 clause 11.5.1', () => {
    expect(eventBits).toEqual(eventStatusBits)
  })

  it('has the status byte of IEEE 488.2 clause 11.2 and SCPI-1999 volume 1, chapter 9', () => {
    expect(statusBits).toEqual(statusByteBits)
  })
})

describe('commands of every instrument', () => {
  const names = ['supply', 'anode-meter', 'coil-meter', 'interlock'] as const
  const { bench } = createWorkbench()

  it.each(names)('the %s knows the 13 mandatory common commands of IEEE 488.2 clause 10', (name) => {
    expect(mandatoryCommonCommands).toHaveLength(13)
    expect(bench.instrument(name).headers).toEqual(expect.arrayContaining(mandatoryCommonCommands))
  })

  it.each(names)('the %s knows the headers required by SCPI-1999 volume 1, 4.2.1 (from memory)', (name) => {
    expect(bench.instrument(name).headers).toEqual(expect.arrayContaining(requiredHeaders))
  })

  it.each(names)('the %s carries out each of them without an error', (name) => {
    const device = bench.instrument(name)
    const needsValue = ['*ESE', '*SRE', 'STATus:OPERation:ENABle', 'STATus:QUEStionable:ENABle']
    for (const header of [...mandatoryCommonCommands, ...requiredHeaders]) {
      const plain = header.replaceAll(/\[[^\]]*\]/g, '')
      device.write(needsValue.includes(header) ? `${plain} 0` : plain)
      expect(device.hasAnswer, header).toBe(header.endsWith('?'))
      if (device.hasAnswer) device.read()
      expect(device.status.errors.length, header).toBe(0)
    }
  })

  it('forms short names by the rule of four letters, three before a vowel (from memory)', () => {
    for (const name of names) {
      for (const header of bench.instrument(name).headers) {
        if (header.startsWith('*')) continue
        for (const form of header.match(/[A-Za-z]+/g) ?? []) {
          const short = form.replaceAll(/[^A-Z]/g, '')
          const isLong = form.length > 4
          const expected = isLong ? form.slice(0, /[AEIOU]/i.test(form[3] ?? '') ? 3 : 4) : form
          expect(short, header).toBe(expected.toUpperCase())
        }
      }
    }
  })
})

describe('behaviour by IEEE 488.2 and SCPI-1999, queue rules read in published manuals', () => {
  let bench: Workbench
  const supply = (message: string) => bench.say('supply', message)

  beforeEach(() => {
    bench = createWorkbench()
    supply('*CLS')
  })

  it('answers *IDN? with four fields', () => {
    for (const name of ['supply', 'anode-meter', 'coil-meter', 'interlock'] as const) {
      expect(bench.say(name, '*IDN?')?.split(',')).toHaveLength(4)
    }
  })

  it('gives errors in the order they came and then no error', () => {
    supply('NOSUCH')
    supply('VOLT 1000,(@2)')
    expect(supply('SYST:ERR?')).toBe('-113,"Undefined header"')
    expect(supply('SYSTem:ERRor:NEXT?')).toBe('-222,"Data out of range"')
    expect(supply('SYST:ERR?')).toBe(noError)
  })

  it('replaces the newest of a full queue by -350 and keeps the older ones', () => {
    for (let count = 0; count < 9; count++) supply('NOSUCH')
    supply('VOLT 1000,(@2)')
    supply('VOLT 1000,(@2)')
    const errors = Array.from({ length: 11 }, () => supply('SYST:ERR?'))
    expect(errors.slice(0, 9)).toEqual(Array(9).fill('-113,"Undefined header"'))
    expect(errors[9]).toBe('-350,"Queue overflow"')
    expect(errors[10]).toBe(noError)
  })

  it('counts what waits in the queue', () => {
    const queue = new ErrorQueue()
    for (let count = 0; count < 15; count++) queue.push(-100)
    expect(queue.length).toBe(10)
  })

  it('clears events, errors and summaries with *CLS but not the enables', () => {
    supply('*ESE 60;*SRE 36;:STAT:QUES:ENAB 3')
    supply('NOSUCH')
    supply('*CLS')
    expect(supply('*ESR?;*ESE?;*SRE?;:STAT:QUES:ENAB?;:SYST:ERR?;:STAT:QUES?')).toBe(`0;60;36;3;${noError};0`)
  })

  it('clears *ESR? by reading and *STB? not', () => {
    supply('NOSUCH')
    expect(supply('*STB?')).toBe('4')
    expect(supply('*STB?')).toBe('4')
    expect(supply('*ESR?')).toBe('32')
    expect(supply('*ESR?')).toBe('0')
  })

  it('starts with the power-on event', () => {
    expect(createWorkbench().say('supply', '*ESR?')).toBe('128')
  })

  it('sums enabled events and errors into the status byte, with the master summary in bit 6', () => {
    supply('*ESE 32;*SRE 32')
    supply('NOSUCH')
    expect(Number(supply('*STB?'))).toBe(4 + 32 + 64)
  })

  it('shows a waiting answer in the status byte', () => {
    expect(supply('*ESE?;*STB?')).toBe('0;16')
  })

  it('keeps bit 6 out of the service request enable', () => {
    expect(supply('*SRE 255;*SRE?')).toBe('191')
  })

  it('leaves events, errors and enables alone with *RST (from memory)', () => {
    supply('*ESE 32;*SRE 32')
    supply('NOSUCH')
    supply('*RST')
    expect(supply('*ESE?;*SRE?;*ESR?;:SYST:ERR?')).toBe('32;32;32;-113,"Undefined header"')
  })

  it('answers *OPC? with 1 and sets event bit 0 with *OPC', () => {
    expect(supply('*OPC?')).toBe('1')
    expect(supply('*OPC;*ESR?')).toBe('1')
  })

  it('latches a questionable condition as an event until it is read', () => {
    bench.bench.model.setEnclosure(true)
    expect(supply('STAT:QUES:COND?')).toBe('512')
    bench.bench.model.setEnclosure(false)
    expect(supply('STAT:QUES:COND?;EVEN?;EVEN?')).toBe('0;512;0')
  })

  it('reports -410 when a new message comes before the answer was read, and drops that answer', () => {
    const device = bench.bench.instrument('supply')
    device.write('*IDN?')
    device.write('*ESE?')
    expect(device.read()).toBe('0')
    expect(supply('SYST:ERR?')).toBe('-410,"Query INTERRUPTED"')
    expect(supply('*ESR?')).toBe('4')
  })

  it('reports -420 when it is read with nothing to say', () => {
    const device = bench.bench.instrument('supply')
    expect(device.read()).toBeNull()
    expect(supply('SYST:ERR?')).toBe('-420,"Query UNTERMINATED"')
  })

  it('reports -440 for a query behind *IDN? in one message', () => {
    expect(supply('*IDN?;*ESE?')?.split(',')).toHaveLength(4)
    expect(supply('SYST:ERR?')).toBe('-440,"Query UNTERMINATED after indefinite response"')
  })

  it('carries on after an execution error and stops after a command error', () => {
    expect(supply('VOLT 1000,(@2);*ESE?')).toBe('0')
    expect(supply('NOSUCH;*ESE?')).toBeNull()
  })

  it('has the numbers of infinity and not-a-number (from memory)', () => {
    expect(specialNumbers).toEqual({ infinity: 9.9e37, negativeInfinity: -9.9e37, notANumber: 9.91e37 })
  })

  it('lets a fault of its own making through, which no message can cause', () => {
    const device = new ScpiDevice({
      identity: ['A', 'B', '0', '0'],
      commands: () => [
        command('FAIL', nothing, () => {
          throw new RangeError('not a SCPI error')
        }),
        command('REFuse', nothing, () => {
          throw new ScpiError(-240)
        }),
      ],
    })
    expect(() => device.write('FAIL')).toThrow(RangeError)
    device.write('REF')
    expect(device.status.errors.next()).toBe('-240,"Hardware error"')
  })
})
