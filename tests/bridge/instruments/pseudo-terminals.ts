import { type ChildProcess, spawn } from 'node:child_process'
import { once } from 'node:events'
import { existsSync } from 'node:fs'
import { mkdtemp, rm } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { pause } from './room.ts'

const responder = fileURLToPath(new URL('./serve-bench.ts', import.meta.url))

/** Starts a program of the system; a missing one is told by name, never passed over. */
async function start(program: string, parameters: string[]): Promise<ChildProcess> {
  const child = spawn(program, parameters, { stdio: ['ignore', 'pipe', 'inherit'] })
  await Promise.race([
    once(child, 'spawn'),
    once(child, 'error').then(([error]: Error[]) => {
      throw new Error(`${program} cannot be started (Debian package of the same name): ${error?.message}`)
    }),
  ])
  return child
}

async function stop(child: ChildProcess): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null) return
  const gone = once(child, 'exit')
  child.kill()
  await gone
}

/** A pair of real pseudo-terminals, joined by socat: `near` for the driver, `far` for the instrument. */
export async function joinTerminals(folder: string, name: string) {
  const near = join(folder, `${name}-near`)
  const far = join(folder, `${name}-far`)
  const child = await start('socat', [`pty,raw,echo=0,link=${near}`, `pty,raw,echo=0,link=${far}`])
  for (let waited = 0; !(existsSync(near) && existsSync(far)); waited += 10) {
    if (waited > 5000) throw new Error('socat made no pair of terminals within 5 s')
    await pause(10)
  }
  return { near, far, unplug: () => stop(child) }
}

export async function terminalFolder(): Promise<{ folder: string; remove(): Promise<void> }> {
  const folder = await mkdtemp(join(tmpdir(), 'coilside-lines-'))
  return { folder, remove: () => rm(folder, { recursive: true, force: true }) }
}

/** A process of its own that serves the instruments of a simulated bench on these terminals. */
export async function serveBench(terminals: Record<string, string>): Promise<{ stop(): Promise<void> }> {
  const child = await start(process.execPath, [
    '--import',
    'tsx',
    responder,
    ...Object.entries(terminals).map(([instrument, path]) => `${instrument}=${path}`),
  ])
  const [line] = (await Promise.race([
    once(child.stdout ?? child, 'data'),
    once(child, 'exit').then(() => ['ended']),
  ])) as [unknown]
  if (String(line).trim() !== 'ready') throw new Error(`The responder did not start: ${line}`)
  return { stop: () => stop(child) }
}
