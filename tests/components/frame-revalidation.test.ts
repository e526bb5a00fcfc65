import { expect, it } from 'vitest'
import { frameRevalidation } from '#app/components/frame-revalidation.ts'

const ask = (from: string, to: string, formAction?: string) =>
  frameRevalidation({
    currentUrl: new URL(from, 'http://127.0.0.1'),
    nextUrl: new URL(to, 'http://127.0.0.1'),
    currentParams: {},
    nextParams: {},
    defaultShouldRevalidate: true,
    ...(formAction === undefined ? {} : { formAction }),
  })

it('The frame of a page is not read anew with the page, nor after what is done on a bench', () => {
  expect(ask('/benches/bench-1', '/benches/bench-1')).toBe(false)
  expect(ask('/benches/bench-1', '/benches/bench-1', '/benches/bench-1/readings')).toBe(false)
  expect(ask('/hall', '/hall', '/make-safe')).toBe(false)
})

it('The frame of a page is read anew with another page, and after what changes it', () => {
  expect(ask('/hall', '/benches/bench-1')).toBe(true)
  expect(ask('/hall', '/hall', '/room-light')).toBe(true)
  expect(ask('/account', '/account', '/account')).toBe(true)
  expect(ask('/hall', '/hall', '/sign-out')).toBe(true)
})
