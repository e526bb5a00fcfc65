import { renderToStaticMarkup } from 'react-dom/server'
import { expect, it } from 'vitest'
import { DeadManWarning } from '#app/components/bench/dead-man-warning.tsx'
import { Telemetry } from '#app/telemetry/telemetry.tsx'
import { liveState } from './bench-state.ts'

function warning(personId: string): string {
  const { controls } = liveState()
  if (!controls) throw new Error('Somebody has to be at the controls.')
  return renderToStaticMarkup(
    <Telemetry socketUrl="ws://127.0.0.1:1/telemetry" benchId="bench-1">
      <DeadManWarning controls={{ ...controls, warned: true }} personId={personId} />
    </Telemetry>,
  )
}

it('The dead-man warns the person at the controls, and has the button that says otherwise', () => {
  const markup = warning('p1')
  expect(markup).toContain('Are you at the bench?')
  expect(markup).toContain('The bridge makes this bench safe soon.')
  expect(markup).toMatch(/<button[^>]*>I am here<\/button>/)
})

it('Everyone else is told who is missed, without a button', () => {
  const markup = warning('p2')
  expect(markup).toContain('Kofi Adeyemi has not been seen at the controls.')
  expect(markup).not.toContain('<button')
})
