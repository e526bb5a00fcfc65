import * as z from 'zod'
import { demoScenario } from './scenario.ts'
import { createSimulator } from './simulator.ts'

const environmentSchema = z.object({
  SIMULATOR_LINK: z.string().min(1).default('127.0.0.1:7410'),
  SIMULATOR_TEST: z.string().min(1).optional(),
  SIMULATOR_SEED: z.coerce.number().int().default(1),
})

const parsed = environmentSchema.safeParse(process.env)
if (!parsed.success) {
  console.error(z.prettifyError(parsed.error))
  process.exit(2)
}
const { SIMULATOR_LINK, SIMULATOR_TEST, SIMULATOR_SEED } = parsed.data

const simulator = createSimulator({ scenario: demoScenario, seed: SIMULATOR_SEED })
const addresses = await simulator.listen({ link: SIMULATOR_LINK, test: SIMULATOR_TEST })
console.log(`Simulator listening: link ${addresses.link}, test ${addresses.test ?? 'none'}`)

for (const signal of ['SIGTERM', 'SIGINT'] as const) {
  process.once(signal, () => {
    simulator.close().then(() => process.exit(0))
  })
}
