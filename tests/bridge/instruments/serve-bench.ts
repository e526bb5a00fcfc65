import { autoDetect } from '@serialport/bindings-cpp'
import { SerialPortStream } from '@serialport/stream'
import { instrumentNames } from '#bridge/simulator/bench.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator } from '#bridge/simulator/simulator.ts'

// Serves the instruments of a simulated bench on terminals, given as `instrument=path`.
const simulator = createSimulator({ scenario: demoScenario, seed: 11 })
const ticking = setInterval(() => simulator.advance(), 50)

await Promise.all(
  process.argv.slice(2).map(async (argument) => {
    const [name, path = ''] = argument.split('=')
    const instrument = instrumentNames.find((known) => known === name)
    if (!instrument) throw new Error(`There is no instrument ${name}`)
    const port = new SerialPortStream({ path, baudRate: 115_200, binding: autoDetect(), autoOpen: false })
    await new Promise<void>((resolve, reject) => port.open((error) => (error ? reject(error) : resolve())))
    const line = simulator.line('bench-1', instrument)
    const cable = { send: (bytes: string) => port.write(bytes, 'latin1'), unplug: () => port.close(() => {}) }
    line.plug(cable)
    port.on('data', (bytes: Buffer) => line.receive(bytes.toString('latin1')))
    port.on('close', () => line.unplugged(cable))
  }),
)
console.log('ready')

process.once('SIGTERM', () => {
  clearInterval(ticking)
  process.exit(0)
})
