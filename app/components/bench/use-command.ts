import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'

/** A form that commands a bench, with the bench's last answer to it. */
export function useCommand(benchId: string) {
  const fetcher = useFetcher<ActionReply>()
  return {
    Form: fetcher.Form,
    submit: fetcher.submit,
    action: href('/benches/:benchId/commands', { benchId }),
    isBusy: fetcher.state !== 'idle',
    reply: fetcher.data,
  }
}
