import { AnswerLine } from '../answer-line.tsx'
import { useCommand } from './use-command.ts'

type Props = { benchId: string; polarity: 1 | -1; isChanging: boolean; isAtControls: boolean }

const words = { 1: '+B', [-1]: '−B' } as const

/** The sense of the coil current. Changing it takes the anode and the coils to zero first. */
export function PolaritySwitch({ benchId, polarity, isChanging, isAtControls }: Props) {
  const command = useCommand(benchId)
  if (!isAtControls)
    return <p className="text-[12.5px] text-ink-soft">field {isChanging ? 'changing' : words[polarity]}</p>
  return (
    <command.Form method="post" action={command.action} className="mt-1.5 text-[12.5px]">
      <input type="hidden" name="kind" value="set-polarity" />
      <fieldset className="flex items-center gap-1.5">
        <legend className="sr-only">Polarity of the coils</legend>
        {([1, -1] as const).map((value) => (
          <button
            key={value}
            type="submit"
            name="polarity"
            value={value}
            aria-pressed={polarity === value}
            disabled={command.isBusy || isChanging}
            className="min-h-7 cursor-pointer rounded-sm border border-edge px-2 text-ink touch:min-h-12 touch:min-w-14 aria-pressed:border-ink aria-pressed:bg-ink aria-pressed:text-ground"
          >
            {words[value]}
          </button>
        ))}
        <span className="text-ink-soft">
          {isChanging ? 'changing: anode and coils go to zero first' : 'polarity'}
        </span>
      </fieldset>
      <AnswerLine reply={command.reply?.ok ? undefined : command.reply} />
    </command.Form>
  )
}
