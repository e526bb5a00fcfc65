import { describe, expect, it } from 'vitest'
import { TelemetryStore } from '#app/telemetry/store.ts'

const hello = {
  type: 'hello',
  version: 1,
  wallOffsetSeconds: 0,
  personId: 'p1',
  pageId: 'page-1',
  resumeKey: 'key-1',
  benchIds: ['bench-1'],
}
const event = (sequence: number) => ({
  type: 'event',
  event: {
    sequence,
    benchId: 'bench-1',
    at: 100 + sequence,
    kind: 'command',
    personId: null,
    personName: null,
    sentence: `Event ${sequence}.`,
    data: {},
  },
})
const send = (store: TelemetryStore, message: object) => store.receive(JSON.stringify(message))

describe('TelemetryStore', () => {
  it('is connected after hello, with the key to come back with', () => {
    const store = new TelemetryStore()
    expect(store.link()).toEqual({ kind: 'connecting' })
    send(store, hello)
    expect(store.link()).toEqual({ kind: 'connected' })
    expect(store.resumeKey).toBe('key-1')
  })

  it('refuses another version with a sentence, and takes nothing from it', () => {
    const store = new TelemetryStore()
    const read = send(store, { ...hello, version: 2 })
    expect(read).toEqual({ ok: false, reason: 'Protocol version 2 is not 1: reload the page.' })
    expect(store.link()).toEqual({ kind: 'connecting' })
  })

  it('keeps the moment at which the link was lost over the tries that follow', () => {
    const store = new TelemetryStore()
    send(store, hello)
    store.setLink({ kind: 'reconnecting', since: 10, reason: null })
    store.setLink({ kind: 'reconnecting', since: 14, reason: null })
    expect(store.link()).toMatchObject({ since: 10 })
  })

  it('keeps the reason that the bridge gave when it left', () => {
    const store = new TelemetryStore()
    send(store, hello)
    send(store, { type: 'bye', reason: 'The bridge is going down.' })
    store.setLink({ kind: 'reconnecting', since: 14, reason: null })
    expect(store.link()).toMatchObject({ kind: 'reconnecting', reason: 'The bridge is going down.' })
  })

  it('lists events newest first and none twice', () => {
    const store = new TelemetryStore()
    for (const sequence of [1, 2, 1, 3]) send(store, event(sequence))
    expect(store.events('bench-1').map(({ sequence }) => sequence)).toEqual([3, 2, 1])
  })

  it('tells only those who listen to what has changed', () => {
    const store = new TelemetryStore()
    const heard: string[] = []
    store.subscribe('events:bench-1', () => heard.push('one'))
    store.subscribe('events:bench-2', () => heard.push('two'))
    send(store, event(1))
    expect(heard).toEqual(['one'])
  })
})
