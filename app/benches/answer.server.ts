import { createCookie, data, redirect } from 'react-router'
import { environment } from '../env.server.ts'
import type { Answered } from './action-reply.ts'

/** What was answered to a form that a page without scripts sent, kept for the page that the browser is sent back to. */
const notice = () =>
  createCookie('coilside_notice', {
    path: '/',
    httpOnly: true,
    sameSite: 'lax',
    secrets: [environment().SESSION_SECRET],
    maxAge: 60,
  })

/** A cookie holds some 4000 characters, coded. */
const longestNotice = 800

/** Whether the browser itself asks for a page, not a script for its data. */
function isForPage({ headers }: Request): boolean {
  const destination = headers.get('Sec-Fetch-Dest')
  if (destination !== null) return destination === 'document'
  return headers.get('Accept')?.includes('text/html') === true
}

/** The reply of an action as its status and data; without scripts the way back to a page that says it. */
export async function answer(request: Request, { status, reply }: Answered, page: string) {
  if (!isForPage(request)) return data(reply, { status })
  const sentence = reply.ok
    ? reply.answer
    : [...Object.values(reply.errors).flat(), ...reply.refusals.map((refusal) => refusal.sentence)].join(' ')
  const cookie = await notice().serialize(sentence.slice(0, longestNotice))
  return redirect(page, { headers: { 'Set-Cookie': cookie } })
}

/** The notice that a request brings, if any, and the Set-Cookie that forgets it. */
export async function takeNotice(request: Request): Promise<{ sentence: string; cookie: string } | null> {
  const sentence: unknown = await notice().parse(request.headers.get('Cookie'))
  if (typeof sentence !== 'string' || sentence === '') return null
  return { sentence, cookie: await notice().serialize('', { maxAge: 0 }) }
}
