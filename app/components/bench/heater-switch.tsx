import { AnswerLine } from '../answer-line.tsx'
import { useCommand } from './use-command.ts'

/** Switches the heater. It shows what was commanded; the figure above it is what was measured. */
export function HeaterSwitch({ benchId, isOn }: { benchId: string; isOn: boolean }) {
  const command = useCommand(benchId)
  return (
    <command.Form method="post" action={command.action} className="mt-1">
      <input type="hidden" name="kind" value="switch-heater" />
      <input type="hidden" name="on" value={isOn ? 'false' : 'true'} />
      <button type="submit" disabled={command.isBusy} className="button button-small">
        {isOn ? 'Heater off' : 'Heater on'}
      </button>
      <AnswerLine reply={command.reply?.ok ? undefined : command.reply} className="text-[12.5px]" />
    </command.Form>
  )
}
