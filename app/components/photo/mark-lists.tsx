import { type Dispatch, useId } from 'react'
import type { PhotoMeasurement } from '#app/analysis/photo-measurement.ts'
import { readScaleNumber } from '#app/runs/photo-marks.ts'
import { fixed } from '../figures.ts'
import { type Mark, type Marks, type MarksAction, ofKind } from './marks.ts'

type Props = {
  marks: Marks
  dispatch: Dispatch<MarksAction>
  measurement: PhotoMeasurement | null
  scale: { lengthMetres: number; graduationMetres: number }
  isFixed: boolean
}

const millimetres = (metres: number | undefined) => fixed(metres === undefined ? null : metres * 1000, 2)

/** The scale's marks, each with what it reads there, and how far it stands off the even scale. */
export function ScaleMarks({ marks, dispatch, measurement, scale, isFixed }: Props) {
  const all = ofKind(marks, 'scale')
  if (all.length === 0) return <p className="text-ink-soft">No scale marks yet.</p>
  return (
    <table className="w-full border-collapse text-right">
      <caption className="sr-only">Scale marks</caption>
      <thead className="text-[12.5px] text-ink-soft">
        <tr className="border-b border-rule">
          <th scope="col" className="py-1 text-left font-normal">
            Scale mark
          </th>
          <th scope="col" className="px-2 py-1 font-normal">
            reads cm
          </th>
          <th scope="col" className="px-2 py-1 font-normal">
            off mm
          </th>
          <th scope="col">
            <span className="sr-only">Remove</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {all.map((mark, index) => (
          <tr key={mark.id} className={`border-b border-rule ${chosen(marks, mark)}`}>
            <th scope="row" className="py-1 text-left font-normal">
              <SelectMark mark={mark} name={`${index + 1}`} marks={marks} dispatch={dispatch} />
            </th>
            <td className="px-2 py-1">
              <ScaleNumber
                mark={mark}
                number={index + 1}
                dispatch={dispatch}
                scale={scale}
                isFixed={isFixed}
              />
            </td>
            <td className="px-2 py-1">{millimetres(measurement?.scale.residualsMetres[index])}</td>
            <td className="py-1">
              {!isFixed && <Remove mark={mark} name={`scale mark ${index + 1}`} dispatch={dispatch} />}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

type NumberProps = Pick<Props, 'dispatch' | 'scale' | 'isFixed'> & { mark: Mark; number: number }

function ScaleNumber({ mark, number, dispatch, scale, isFixed }: NumberProps) {
  const id = useId()
  const { error } = readScaleNumber(mark.centimetres, scale)
  const isWrong = error !== null && mark.centimetres !== ''
  return (
    <>
      <input
        value={mark.centimetres}
        onChange={(event) => dispatch({ do: 'type', id: mark.id, centimetres: event.target.value })}
        onFocus={() => dispatch({ do: 'select', id: mark.id })}
        readOnly={isFixed}
        inputMode="decimal"
        autoComplete="off"
        maxLength={30}
        aria-label={`Scale mark ${number}, what it reads in cm`}
        aria-invalid={isWrong || undefined}
        aria-describedby={isWrong ? id : undefined}
        className="min-h-8 w-20 px-2 text-right touch:min-h-12"
      />
      {isWrong && (
        <span id={id} role="alert" className="block max-w-52 text-left text-[12.5px] text-trip">
          {error}
        </span>
      )}
    </>
  )
}

/** The beam's points, each with how far it lies outside the fitted circle. */
export function BeamPoints({ marks, dispatch, measurement, isFixed }: Omit<Props, 'scale'>) {
  const all = ofKind(marks, 'point')
  if (all.length === 0) return <p className="text-ink-soft">No beam points yet.</p>
  return (
    <table className="w-full border-collapse text-right">
      <caption className="sr-only">Beam points</caption>
      <thead className="text-[12.5px] text-ink-soft">
        <tr className="border-b border-rule">
          <th scope="col" className="py-1 text-left font-normal">
            Beam point
          </th>
          <th scope="col" className="px-2 py-1 font-normal">
            outside the circle mm
          </th>
          <th scope="col">
            <span className="sr-only">Remove</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {all.map((mark, index) => (
          <tr key={mark.id} className={`border-b border-rule ${chosen(marks, mark)}`}>
            <th scope="row" className="py-0.5 text-left font-normal">
              <SelectMark mark={mark} name={`${index + 1}`} marks={marks} dispatch={dispatch} />
            </th>
            <td className="px-2 py-0.5">{millimetres(measurement?.residualsMetres[index])}</td>
            <td className="py-0.5">
              {!isFixed && <Remove mark={mark} name={`beam point ${index + 1}`} dispatch={dispatch} />}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

const chosen = (marks: Marks, mark: Mark) => (marks.selectedId === mark.id ? 'bg-surface font-medium' : '')

type MarkProps = Pick<Props, 'dispatch'> & { mark: Mark; name: string }

function SelectMark({ mark, name, marks, dispatch }: MarkProps & { marks: Marks }) {
  const isSelected = marks.selectedId === mark.id
  return (
    <button
      type="button"
      aria-pressed={isSelected}
      onClick={() => dispatch({ do: 'select', id: mark.id })}
      className="link-alone min-w-8"
    >
      <span className="sr-only">{mark.kind === 'scale' ? 'Choose scale mark ' : 'Choose beam point '}</span>
      {name}
    </button>
  )
}

function Remove({ mark, name, dispatch }: MarkProps) {
  return (
    <button
      type="button"
      onClick={() => dispatch({ do: 'remove', id: mark.id })}
      className="link-alone text-ink-soft"
    >
      remove<span className="sr-only"> {name}</span>
    </button>
  )
}
