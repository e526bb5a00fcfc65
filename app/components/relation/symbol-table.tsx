import { useId } from 'react'
import { type Quantity, quantities, quantityWords, type Symbols } from '#app/relation/quantities.ts'

type Props = {
  typed: Symbols
  errors: Partial<Record<Quantity, string>>
}

/** Which symbol of the formula stands for what. */
export function SymbolTable({ typed, errors }: Props) {
  const id = useId()
  return (
    <table className="w-full border-collapse text-left">
      <caption className="sr-only">Which of your symbols stands for what</caption>
      <thead>
        <tr className="border-b border-ink text-[12.5px] text-ink-soft">
          <th scope="col" className="py-1.5 pr-2 font-normal">
            your symbol
          </th>
          <th scope="col" className="px-2 font-normal">
            stands for the
          </th>
          <th scope="col" className="pl-2 text-right font-normal">
            in
          </th>
        </tr>
      </thead>
      <tbody>
        {quantities.map((quantity) => (
          <tr key={quantity} className="border-b border-rule">
            <td className="w-28 py-1 pr-2 align-top">
              <input
                name={quantity}
                aria-label={`Symbol of the ${quantityWords[quantity].name}`}
                aria-invalid={errors[quantity] ? true : undefined}
                aria-describedby={errors[quantity] ? `${id}-${quantity}` : undefined}
                defaultValue={typed[quantity] ?? ''}
                autoComplete="off"
                autoCapitalize="none"
                spellCheck={false}
                className="min-h-8 w-24 px-2 font-medium touch:min-h-12"
              />
            </td>
            <td className="px-2 py-1.5 touch:py-3.5">
              {quantityWords[quantity].name}
              {errors[quantity] && (
                <span id={`${id}-${quantity}`} role="alert" className="block font-medium text-trip">
                  {errors[quantity]}
                </span>
              )}
            </td>
            <td className="py-1.5 pl-2 text-right whitespace-nowrap text-ink-soft touch:py-3.5">
              {quantityWords[quantity].unit}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
