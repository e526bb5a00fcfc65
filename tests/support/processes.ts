import { type ChildProcess, spawn } from 'node:child_process'
import { once } from 'node:events'
import { createServer } from 'node:net'

/** A child process whose output is kept, and printed with its name when asked. */
export type Process = {
  name: string
  child: ChildProcess
  output: () => string
  /** Ends it with the signal and waits until it is gone. A process that does not go within eight seconds is killed. */
  stop: (signal?: NodeJS.Signals) => Promise<void>
}

export function startProcess(
  name: string,
  args: string[],
  { env, isLoud = false }: { env: Record<string, string>; isLoud?: boolean },
): Process {
  const child = spawn(process.execPath, args, {
    env: { ...process.env, ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  let kept = ''
  for (const stream of [child.stdout, child.stderr]) {
    stream.setEncoding('utf8')
    stream.on('data', (text: string) => {
      kept = (kept + text).slice(-100_000)
      if (isLoud) process.stderr.write(text.replace(/^(?=.)/gm, `[${name}] `))
    })
  }
  const isGone = () => child.exitCode !== null || child.signalCode !== null
  return {
    name,
    child,
    output: () => kept,
    async stop(signal = 'SIGTERM') {
      if (isGone()) return
      const gone = once(child, 'exit')
      child.kill(signal)
      const late = setTimeout(() => child.kill('SIGKILL'), 8_000)
      await gone
      clearTimeout(late)
    },
  }
}

/** A port that was free a moment ago. */
export async function freePort(): Promise<number> {
  const server = createServer().listen(0, '127.0.0.1')
  await once(server, 'listening')
  const address = server.address()
  server.close()
  await once(server, 'close')
  if (address === null || typeof address === 'string') throw new Error('The system gave no port')
  return address.port
}

/** Asks again until the answer is truthy; throws with `what` after the time limit. */
export async function until<T>(
  what: string,
  ask: () => T | Promise<T>,
  limitMs = 15_000,
): Promise<NonNullable<T>> {
  const end = Date.now() + limitMs
  for (;;) {
    const answer = await ask()
    if (answer) return answer
    if (Date.now() > end) throw new Error(`Waited ${limitMs / 1000} s in vain: ${what}`)
    await new Promise((resolve) => setTimeout(resolve, 25))
  }
}
