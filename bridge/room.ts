import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { Ticket } from '#app/protocol/commands.ts'
import type { Actor } from '#app/safety/types.ts'
import { Bench, type BenchOptions, type NewEvent } from './bench.ts'

type RoomOptions = Omit<BenchOptions, 'benchId'>

export type Room = {
  bench(benchId: string): Bench | undefined
  benches(): Bench[]
  /** Benches that the new configuration does not name any more become unconfigured. */
  configure(benches: readonly BenchConfig[]): void
  /** Commands every bench off at once; a sentence each. */
  makeSafe(
    cause: string,
    actor?: Pick<Actor, 'personId' | 'name'>,
  ): Promise<{ benchId: string; answer: string }[]>
  /** Make safe as a page asks for it: one bench that it may watch, or the room if its ticket says so. */
  makeSafeFromPage(ticket: Ticket, benchId: string | null): Promise<void>
  /** From here on nothing is switched on. */
  end(): void
  close(): Promise<void>
}

/** The benches of one room. */
export function createRoom(options: RoomOptions): Room {
  const benches = new Map<string, Bench>()
  const refuse = (ticket: Ticket, benchId: string | null, sentence: string) => {
    const event: NewEvent = {
      benchId,
      at: options.wallOf(options.clock.now()),
      kind: 'refusal',
      personId: ticket.personId,
      personName: ticket.name,
      sentence: `Refused (make-safe): ${sentence}`,
      data: { codes: ['not-permitted'] },
    }
    options.onEvent(event)
  }
  const room: Room = {
    bench: (benchId) => benches.get(benchId),
    benches: () => [...benches.values()],
    configure(configs) {
      for (const config of configs) {
        let bench = benches.get(config.benchId)
        if (!bench) {
          bench = new Bench({ ...options, benchId: config.benchId })
          benches.set(config.benchId, bench)
        }
        bench.configure(config)
      }
      for (const [benchId, bench] of benches) {
        if (!configs.some((config) => config.benchId === benchId)) bench.configure(null)
      }
    },
    makeSafe: (cause, actor) =>
      Promise.all(
        [...benches.values()].map(async (bench) => ({
          benchId: bench.benchId,
          answer: await bench.makeSafe(cause, actor),
        })),
      ),
    async makeSafeFromPage(ticket, benchId) {
      const bench = benchId === null ? undefined : benches.get(benchId)
      const isWatched = ticket.benchIds === null || (benchId !== null && ticket.benchIds.includes(benchId))
      if (ticket.role === 'guest') {
        refuse(ticket, bench && isWatched ? benchId : null, 'A guest of a demonstration may watch only.')
        return
      }
      const cause = `${ticket.name} asked for make safe.`
      if (benchId === null) {
        if (ticket.room) await room.makeSafe(cause, ticket)
        else refuse(ticket, null, 'Only an instructor or a technician may make the whole room safe.')
        return
      }
      if (bench && isWatched) await bench.makeSafe(cause, ticket)
      else refuse(ticket, null, bench ? `You do not watch ${benchId}.` : 'There is no such bench.')
    },
    end() {
      for (const bench of benches.values()) bench.end()
    },
    async close() {
      await Promise.all([...benches.values()].map((bench) => bench.close()))
    },
  }
  return room
}
