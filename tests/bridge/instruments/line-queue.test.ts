import { afterEach, expect, test } from 'vitest'
import { LineError } from '#bridge/instruments/line-errors.ts'
import { pause, reached } from './room.ts'
import { createPeer, lineTo, openLineTo, type Peer, whole } from './scripted-peer.ts'

const closing: (() => Promise<void>)[] = []
afterEach(async () => {
  for (const close of closing.splice(0).reverse()) await close()
})

async function scripted(options: Parameters<typeof openLineTo>[1] = {}) {
  const peer = await createPeer()
  closing.push(() => peer.close())
  const line = await openLineTo(peer, options)
  closing.push(() => line.close())
  peer.messages.length = 0
  return { peer, line }
}

const slow = (peer: Peer, milliseconds: number) => {
  peer.deliver = (answer, send) => setTimeout(() => send(answer), milliseconds)
}
const heads = (peer: Peer) => peer.texts().map((text) => text.split(';')[0])
const echo = (text: string) => [`ECHO? ${text}`, (answer: string) => answer] as const

test('one command is in flight at a time, in the order in which they were given', async () => {
  const { peer, line } = await scripted()
  slow(peer, 30)
  const start = performance.now()
  const answers = await Promise.all(['1', '2', '3'].map((text) => line.query(...echo(text))))
  expect(answers).toEqual(['1', '2', '3'])
  const times = peer.messages.map(({ at }) => at - start)
  expect((times[1] ?? 0) - (times[0] ?? 0)).toBeGreaterThan(28)
  expect((times[2] ?? 0) - (times[1] ?? 0)).toBeGreaterThan(28)
})

test('an urgent set leaves after the one command in flight and before everything queued', async () => {
  const { peer, line } = await scripted()
  slow(peer, 20)
  const queries = ['1', '2', '3'].map((text) => line.query(...echo(text)))
  const off = ['OUTP OFF,(@2)', 'OUTP OFF,(@3)'].map((text) => line.set(text, { urgent: true }))
  await Promise.all([...queries, ...off])
  expect(heads(peer)).toEqual([
    'ECHO? 1',
    'OUTP OFF,(@2)',
    'SYST:ERR?',
    'OUTP OFF,(@3)',
    'SYST:ERR?',
    'ECHO? 2',
    'ECHO? 3',
  ])
})

test('an urgent set makes void the sets that were queued before it, so that none of them undoes it', async () => {
  const { peer, line } = await scripted()
  slow(peer, 20)
  const query = line.query(...echo('1'))
  const on = line.set('OUTP ON,(@2)').catch((error: unknown) => error)
  const off = line.set('OUTP OFF,(@2)', { urgent: true })
  await Promise.all([query, off])
  expect(await on).toMatchObject({ fault: 'overtaken' })
  await line.query(...echo('2'))
  expect(peer.texts()).not.toContain('OUTP ON,(@2)')
})

test('an urgent set does not wait until a line in doubt is in step again', async () => {
  const { peer, line } = await scripted({ limitSeconds: 0.05 })
  peer.deliver = () => {}
  const query = line.query(...echo('1')).catch((error: unknown) => error)
  await pause(150)
  expect(peer.texts().some((text) => text.includes('*ESE'))).toBe(true)
  const asked = performance.now()
  const off = line.set('OUTP OFF,(@2)', { urgent: true })
  await pause(40)
  const sent = peer.messages.find(({ text }) => text === 'OUTP OFF,(@2)')
  expect((sent?.at ?? Number.POSITIVE_INFINITY) - asked).toBeLessThan(40)
  peer.deliver = (answer, send) => send(answer)
  await expect(off).resolves.toBeUndefined()
  expect(await query).toBe('1')
  expect(heads(peer).filter((text) => text === 'OUTP OFF,(@2)')).toHaveLength(1)
})

test('a query is asked once again when it was not answered, and then fails', async () => {
  const { peer, line } = await scripted({ limitSeconds: 0.05 })
  peer.deliver = (answer, send, message) => {
    if (!message.startsWith('ECHO')) send(answer)
  }
  await expect(line.query(...echo('7'))).rejects.toMatchObject({ fault: 'timeout' })
  expect(heads(peer).filter((text) => text === 'ECHO? 7')).toHaveLength(2)
  expect(line.status).toBe('open')
})

test('a set that is not confirmed is sent once and rejects as unconfirmed', async () => {
  const { peer, line } = await scripted({ limitSeconds: 0.05 })
  peer.deliver = (answer, send, message) => {
    if (!message.startsWith('SYST')) send(answer)
  }
  await expect(line.set('VOLT 5,(@2)')).rejects.toMatchObject({ fault: 'unconfirmed' })
  expect(await line.query(...echo('1'))).toBe('1')
  expect(peer.texts().filter((text) => text === 'VOLT 5,(@2)')).toHaveLength(1)
})

test('a late answer is not taken for the answer to the next query', async () => {
  const { peer, line } = await scripted({ limitSeconds: 0.05 })
  peer.deliver = (answer, send, message) => {
    if (message.startsWith('ECHO? 1')) setTimeout(() => send(answer), 70)
    else send(answer)
  }
  const late = line.query(...echo('1')).catch((error: unknown) => error)
  const next = await Promise.all(['2', '3'].map((text) => line.query(...echo(text))))
  expect(next).toEqual(['2', '3'])
  expect(await late).toBeInstanceOf(LineError)
})

test('an answer that comes twice is taken once', async () => {
  const { peer, line } = await scripted()
  peer.deliver = (answer, send) => send(answer + answer)
  for (let number = 0; number < 20; number++) {
    expect(await line.query(...echo(String(number)))).toBe(String(number))
  }
})

test('lines that nobody asked for are dropped, whatever they hold', async () => {
  const { peer, line } = await scripted()
  peer.send('12.5\n12.5;1\n1;1;1\n')
  await pause(20)
  peer.deliver = (answer, send) => send(`99\n~~~\n${answer}98;1;1;1;1\n`)
  for (let number = 0; number < 20; number++) {
    expect(await line.query(...echo(`v${number}`))).toBe(`v${number}`)
  }
  expect(line.counts.rubbishLines).toBeGreaterThan(20)
})

test('the beginning of a line that came before the query does not run into its answer', async () => {
  const { peer, line } = await scripted()
  for (const text of ['11', '22', '33']) {
    peer.send('9')
    await pause(20)
    expect(await line.query(...echo(text))).toBe(text)
  }
})

test('answers that end in a carriage return as well are read', async () => {
  const { peer, line } = await scripted()
  peer.deliver = (answer, send) => send(answer.replace('\n', '\r\n'))
  expect(await line.query('ECHO? 5', whole('5'))).toBe('5')
})

test('a flood without a line end is dropped, and the line is of use after it', async () => {
  const { peer, line } = await scripted()
  peer.deliver = (answer, send, message) => {
    if (message.startsWith('ECHO? 1')) send('8'.repeat(4_000_000))
    else send(answer)
  }
  const before = process.memoryUsage().arrayBuffers
  await expect(line.query(...echo('1'))).rejects.toBeInstanceOf(LineError)
  peer.send('\n')
  expect(await line.query(...echo('2'))).toBe('2')
  expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(16_000_000)
})

test('an instrument that is silent is a lost line, told all off once more, and open again when it answers', async () => {
  const { peer, line } = await scripted({ greeting: 'OUTP OFF,(@1,2,3)' })
  peer.deliver = () => {}
  const lost = reached(line, 'lost')
  await expect(line.query(...echo('1'))).rejects.toMatchObject({ fault: 'lost' })
  expect(await lost).toBe('The instrument does not answer')
  await pause(50)
  expect(peer.texts().at(-1)).toBe('OUTP OFF,(@1,2,3)')
  await expect(line.set('VOLT 1,(@1)', { urgent: true })).rejects.toMatchObject({ fault: 'lost' })
  const again = reached(line, 'open')
  peer.deliver = (answer, send) => send(answer)
  await again
  expect(await line.query(...echo('2'))).toBe('2')
})

test('whenever a line is opened, all off is the first that is sent', async () => {
  const peer = await createPeer()
  closing.push(() => peer.close())
  const line = await openLineTo(peer, { greeting: 'OUTP OFF,(@1,2,3)' })
  closing.push(() => line.close())
  expect(peer.texts()[0]).toBe('OUTP OFF,(@1,2,3)')
  peer.messages.length = 0
  peer.cut()
  await reached(line, 'lost')
  await reached(line, 'open')
  expect(peer.texts()[0]).toBe('OUTP OFF,(@1,2,3)')
})

test('a line that cannot be opened is tried again after 0.25 s, doubled each time, until it is closed', async () => {
  const peer = await createPeer()
  closing.push(() => peer.close())
  peer.isRefusing = true
  const line = lineTo(peer)
  line.open()
  expect(line.status).toBe('opening')
  expect(await reached(line, 'lost')).toBe('line cut')
  await pause(2000)
  await line.close()
  expect(line.status).toBe('closed')
  const gaps = peer.calls.slice(1).map((at, index) => at - (peer.calls[index] ?? 0))
  expect(gaps).toHaveLength(3)
  for (const [index, least] of [250, 500, 1000].entries())
    expect(gaps[index]).toBeGreaterThanOrEqual(least - 2)
  const calls = peer.calls.length
  await pause(2200)
  expect(peer.calls).toHaveLength(calls)
})

test('closing rejects what is queued and in flight, and nothing is sent afterwards', async () => {
  const { peer, line } = await scripted()
  peer.deliver = () => {}
  const queries = ['1', '2'].map((text) => line.query(...echo(text)).catch((error: unknown) => error))
  await pause(20)
  await line.close()
  for (const error of await Promise.all(queries)) expect(error).toMatchObject({ fault: 'closed' })
  const sent = peer.messages.length
  await pause(400)
  expect(peer.messages).toHaveLength(sent)
  await expect(line.query(...echo('3'))).rejects.toMatchObject({ fault: 'closed' })
})
