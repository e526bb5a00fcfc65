import type { PlannerView } from '#app/runs/planner-view.ts'

const words = { limit: 'limit', glass: 'glass', faint: 'faint' } as const

/** Voltages downwards, currents across: the diameter that the beam would have, or why it cannot be set or read. */
export function SettingMap({ map }: { map: NonNullable<PlannerView['map']>[number] }) {
  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reached by keyboard
    <section aria-label={mapWords(map.polarity)} tabIndex={0} className="min-w-0 overflow-x-auto">
      <table className="border-collapse text-right text-[12.5px]">
        <caption className="py-1 text-left text-ink-soft">
          {mapWords(map.polarity)}, diameter in cm. A frame marks a setting that the plan takes.
        </caption>
        <thead>
          <tr className="text-ink-soft">
            <th scope="col" className="px-2 py-1 text-left font-normal">
              V \ A
            </th>
            {map.amps.map((amps) => (
              <th key={amps} scope="col" className="px-2 py-1 font-normal">
                {amps.toFixed(2)}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {map.rows.map(({ anodeVolts, cells }) => (
            <tr key={anodeVolts}>
              <th scope="row" className="px-2 py-1 text-left font-normal text-ink-soft">
                {anodeVolts}
              </th>
              {cells.map(({ coilAmps, diameterMetres, refused, times }) => (
                <td
                  key={coilAmps}
                  className={`min-w-14 border border-rule px-2 py-1 ${refused ? 'hatch text-ink-soft' : ''} ${times > 0 ? 'font-bold outline-2 -outline-offset-2 outline-ink' : ''}`}
                >
                  {refused ? words[refused] : (diameterMetres * 100).toFixed(1)}
                  {times > 1 && <span className="text-ink-soft"> ×{times}</span>}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}

const mapWords = (polarity: 1 | -1): string => (polarity === 1 ? 'Field +B' : 'Field −B, reversed')
