import { randomUUID } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { pictureSchema } from '#app/protocol/messages.ts'
import type { Address } from '#bridge/simulator/addresses.ts'
import type { InstrumentName } from '#bridge/simulator/bench.ts'
import { LineClient } from './line-client.ts'
import { createWorkbench, type Workbench } from './workbench.ts'

let bench: Workbench
let link: Address
let test: Address
const clients: LineClient[] = []

async function open(line: string): Promise<LineClient> {
  const client = await LineClient.open(link, line)
  clients.push(client)
  return client
}

async function connectTest(): Promise<LineClient> {
  const client = await LineClient.connect(test)
  clients.push(client)
  return client
}

const setLine = (instrument: InstrumentName, mode: string, more: Record<string, unknown> = {}) =>
  bench.ask('line', { instrument, mode, ...more })

const identity = 'COILSIDE,TRIPLE SUPPLY,BENCH-1,1.0'

beforeEach(async () => {
  bench = createWorkbench()
  const addresses = await bench.simulator.listen({ link: '127.0.0.1:0', test: '127.0.0.1:0' })
  link = addresses.link ?? ''
  test = addresses.test ?? ''
})

afterEach(async () => {
  for (const client of clients.splice(0)) client.close()
  await bench.simulator.close()
})

describe('the link socket over TCP', () => {
  it.each([
    ['bench-1/supply', identity],
    ['bench-2/anode-meter', 'COILSIDE,VOLT METER,BENCH-2,1.0'],
    ['bench-3/coil-meter', 'COILSIDE,AMPERE METER,BENCH-3,1.0'],
    ['bench-1/interlock', 'COILSIDE,INTERLOCK UNIT,BENCH-1,1.0'],
  ])('opens %s and carries its serial text', async (line, answer) => {
    const client = await open(line)
    expect(await client.ask('*IDN?')).toBe(answer)
  })

  it.each(['bench-9/supply', 'bench-1/toaster', 'nonsense', ''])(
    'refuses OPEN %j with a reason',
    async (line) => {
      await expect(LineClient.open(link, line)).rejects.toThrow(/^NO ./)
    },
  )

  it('refuses an opening that never ends', async () => {
    const client = await LineClient.connect(link)
    clients.push(client)
    client.send('x'.repeat(1000))
    expect(await client.line()).toMatch(/^NO /)
  })

  it('takes what follows the opening in the same packet', async () => {
    const client = await LineClient.connect(link)
    clients.push(client)
    client.send('OPEN bench-1/supply\n*IDN?\n')
    expect(await client.line()).toBe('OK')
    expect(await client.line()).toBe(identity)
  })

  it('puts messages together from any pieces and splits what comes at once', async () => {
    const client = await open('bench-1/supply')
    for (const piece of ['*ID', 'N', '?', '\n*E', 'SE?\n*OPC?\n']) client.send(piece)
    expect([await client.line(), await client.line(), await client.line()]).toEqual([identity, '0', '1'])
  })

  it('keeps the instrument as it was over connections', async () => {
    const first = await open('bench-1/supply')
    expect(await first.ask('VOLT 123,(@2);*OPC?')).toBe('1')
    first.close()
    const second = await open('bench-1/supply')
    expect(await second.ask('VOLT? (@2)')).toBe('123.00')
  })

  it('gives the line to a second connection and drops the first', async () => {
    const first = await open('bench-1/supply')
    const second = await open('bench-1/supply')
    await first.closed()
    expect(await second.ask('*IDN?')).toBe(identity)
  })

  it('reports an overrun of the input buffer and carries on with the next line', async () => {
    const client = await open('bench-1/supply')
    await client.ask('*CLS;*OPC?')
    client.send('X'.repeat(3000))
    client.send('X'.repeat(3000))
    client.send('\n')
    expect(await client.ask('SYST:ERR?')).toBe('-363,"Input buffer overrun"')
    expect(await client.ask('SYST:ERR?')).toBe('0,"No error"')
  })

  it('passes bytes beyond ASCII through to a proper error', async () => {
    const client = await open('bench-1/supply')
    await client.ask('*CLS;*OPC?')
    client.send('\u00ff\u0000\u0080\n')
    expect(await client.ask('SYST:ERR?')).toBe('-101,"Invalid character"')
  })

  it('also listens at the path of a Unix socket', async () => {
    const path = join(tmpdir(), `simulator-${randomUUID()}.sock`)
    const other = createWorkbench()
    expect(await other.simulator.listen({ link: path })).toEqual({ link: path, test: null })
    const client = await LineClient.open(path, 'bench-1/supply')
    expect(await client.ask('*IDN?')).toBe(identity)
    client.close()
    await other.simulator.close()
  })
})

describe('the camera', () => {
  it('answers PICTURE with a line that the protocol knows', async () => {
    bench.bringUp(200, 1.5)
    const camera = await open('bench-1/camera')
    const picture: unknown = JSON.parse(await camera.ask('PICTURE'))
    const parsed = pictureSchema.omit({ type: true, benchId: true }).parse(picture)
    expect(parsed.points.length).toBeGreaterThan(120)
    expect(parsed.widthMillimetres).toBe(1.2)
    expect(await camera.ask('SMILE')).toMatch(/^NO /)
  })

  it('shows nothing without a beam', async () => {
    const camera = await open('bench-1/camera')
    expect(JSON.parse(await camera.ask('PICTURE'))).toMatchObject({ points: [], brightness: 0 })
  })
})

describe('line modes', () => {
  it('cut drops the connection and refuses a new one until it is good again', async () => {
    const client = await open('bench-1/supply')
    setLine('supply', 'cut')
    await client.closed()
    await expect(LineClient.open(link, 'bench-1/supply')).rejects.toThrow('NO line cut')
    expect(await (await open('bench-1/anode-meter')).ask('*OPC?')).toBe('1')
    setLine('supply', 'good')
    expect(await (await open('bench-1/supply')).ask('*IDN?')).toBe(identity)
  })

  it('silent accepts, loses what is sent and never answers', async () => {
    bench.bringUp(200, 1.5)
    const client = await open('bench-1/supply')
    await client.ask('LINK:TIM 2;*OPC?')
    setLine('supply', 'silent')
    client.send('*IDN?\n')
    bench.wait(1.5)
    client.send('OUTP ON,(@2)\n')
    const again = await open('bench-1/supply')
    again.send('*IDN?\n')
    await new Promise((resolve) => setTimeout(resolve, 100))
    expect(again.take()).toBe('')
    bench.wait(1)
    expect(bench.ask('setpoints')).toMatchObject({ on: { anode: false } })
    setLine('supply', 'good')
    expect(await again.ask('OUTP? (@2)')).toBe('0')
  })

  it('fragment lets the answer dribble out, one to three bytes at a time', async () => {
    const client = await open('bench-1/supply')
    setLine('supply', 'fragment')
    client.pieces.length = 0
    expect(await client.ask('*IDN?')).toBe(identity)
    expect(client.pieces.length).toBeGreaterThan(5)
    expect(await client.ask('*OPC?')).toBe('1')
  })

  it('garble replaces some characters, never by one that could belong to a number', async () => {
    const client = await open('bench-1/supply')
    setLine('supply', 'garble')
    const answers: string[] = []
    for (let count = 0; count < 40; count++) answers.push(await client.ask('*IDN?'))
    expect(answers.every((answer) => answer.length === identity.length)).toBe(true)
    const damaged = answers.join('').replaceAll(/[A-Z0-9 ,.-]/g, '')
    expect(damaged.length).toBeGreaterThan(40)
    expect(damaged).toMatch(/^[?~#@%\u007f]+$/)
    setLine('supply', 'good')
    expect(await client.ask('*IDN?')).toBe(identity)
  })

  it('delay holds answers back and keeps their order', async () => {
    const client = await open('bench-1/supply')
    setLine('supply', 'delay', { milliseconds: 150 })
    const sent = performance.now()
    client.send('*IDN?\n*OPC?\n')
    expect(await client.line()).toBe(identity)
    expect(performance.now() - sent).toBeGreaterThan(140)
    expect(await client.line()).toBe('1')
  })

  it('flood puts rubbish lines between whole answers', async () => {
    const client = await open('bench-1/supply')
    setLine('supply', 'flood', { milliseconds: 5 })
    client.send('*IDN?\n')
    const lines: string[] = []
    while (lines.length < 12) lines.push(await client.line())
    expect(lines.filter((line) => line === identity)).toHaveLength(1)
    expect(lines.filter((line) => line !== identity).every((line) => !/\d/.test(line))).toBe(true)
  })
})

describe('the test socket over TCP', () => {
  const ask = async (client: LineClient, values: Record<string, unknown>) =>
    JSON.parse(await client.ask(JSON.stringify(values))) as unknown

  it('answers by the number of the ask', async () => {
    const client = await connectTest()
    expect(await ask(client, { id: 41, ask: 'e-stop', bench: 'bench-1', in: true })).toEqual({
      id: 41,
      ok: true,
      answer: null,
    })
    expect(await ask(client, { id: 'a', ask: 'setpoints', bench: 'bench-1' })).toMatchObject({
      id: 'a',
      ok: true,
      answer: {
        anodeVolts: 0,
        coilAmps: 0,
        heaterVolts: 0,
        on: { heater: false, anode: false, coils: false },
      },
    })
    const meter = await open('bench-1/interlock')
    expect(await meter.ask('INT:STAT? (@1,2)')).toBe('0,1')
  })

  it('says what is wrong with a line that is not JSON and goes on', async () => {
    const client = await connectTest()
    expect(JSON.parse(await client.ask('not json'))).toMatchObject({ id: null, ok: false })
    expect(await ask(client, { id: 1, ask: 'truth', bench: 'bench-2' })).toMatchObject({ ok: true })
  })

  it('e-stop takes the anode off with every cable unplugged', async () => {
    bench.bringUp(300, 1.5)
    const client = await connectTest()
    await ask(client, { id: 1, ask: 'e-stop', bench: 'bench-1', in: true })
    bench.wait(0.5)
    const reply = await ask(client, { id: 2, ask: 'terminal', bench: 'bench-1' })
    expect(reply).toMatchObject({ ok: true })
    expect(bench.terminal().anodeVolts).toBeLessThan(5)
  })
})
