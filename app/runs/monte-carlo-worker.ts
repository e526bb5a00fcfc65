import { type MonteCarloRequest, monteCarloSession } from './monte-carlo.ts'

// A message to oneself comes sooner than the shortest timeout, and after those that wait.
const turns = new MessageChannel()
const tasks: (() => void)[] = []
turns.port1.onmessage = () => tasks.shift()?.()

const answer = monteCarloSession(
  (report) => postMessage(report),
  (task) => {
    tasks.push(task)
    turns.port2.postMessage(null)
  },
)

addEventListener('message', ({ data }: MessageEvent<MonteCarloRequest>) => answer(data))
