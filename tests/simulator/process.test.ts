import { type ChildProcess, spawn } from 'node:child_process'
import { once } from 'node:events'
import { createInterface } from 'node:readline'
import { afterEach, describe, expect, it } from 'vitest'
import { LineClient } from './line-client.ts'

let child: ChildProcess | null = null

afterEach(() => {
  child?.kill('SIGKILL')
  child = null
})

function start(environment: Record<string, string>): ChildProcess {
  child = spawn(process.execPath, ['--import', 'tsx', 'bridge/simulator/main.ts'], {
    env: { ...process.env, ...environment },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  return child
}

async function addressesOf(process: ChildProcess): Promise<{ link: string; test: string }> {
  if (!process.stdout) throw new Error('no output')
  const [line] = (await once(createInterface({ input: process.stdout }), 'line')) as [string]
  const match = /link (\S+), test (\S+)/.exec(line)
  return { link: match?.[1] ?? '', test: match?.[2] ?? '' }
}

describe('the simulator as a process of its own', () => {
  it('says where it listens, keeps time with nobody connected, and ends on SIGTERM', async () => {
    const running = start({
      SIMULATOR_LINK: '127.0.0.1:0',
      SIMULATOR_TEST: '127.0.0.1:0',
      SIMULATOR_SEED: '3',
    })
    const { link, test } = await addressesOf(running)
    const supply = await LineClient.open(link, 'bench-1/supply')
    expect(await supply.ask('LINK:TIM 0.4;:VOLT 50,(@2);:OUTP ON,(@2);:OUTP? (@2)')).toBe('1')
    supply.close()

    const asks = await LineClient.connect(test)
    const isAnodeOn = async () => {
      const reply = JSON.parse(await asks.ask(JSON.stringify({ id: 1, ask: 'setpoints', bench: 'bench-1' })))
      return reply.answer.on.anode as boolean
    }
    while (await isAnodeOn()) await new Promise((resolve) => setTimeout(resolve, 50))

    const ended = once(running, 'exit')
    running.kill('SIGTERM')
    expect(await ended).toEqual([0, null])
    asks.close()
  })

  it('refuses a seed that is no number', async () => {
    const running = start({ SIMULATOR_LINK: '127.0.0.1:0', SIMULATOR_SEED: 'lots' })
    expect(await once(running, 'exit')).toEqual([2, null])
  })
})
