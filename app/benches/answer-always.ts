import { data, isRouteErrorResponse } from 'react-router'
import { refused } from './action-reply.ts'

/**
 * The browser's half of an action on a bench: a web application that does not answer, or fails, becomes a refusal beside the form.
 * It must not take the page away, with its live values and its make safe, which need the bridge alone.
 */
export async function answerAlways<T>({ serverAction }: { serverAction: () => Promise<T> }) {
  try {
    return await serverAction()
  } catch (error) {
    if (error instanceof Response || (isRouteErrorResponse(error) && error.status < 500)) throw error
    const sentence =
      'The web application did not answer: whether this was done is not known. The bridge keeps its limits and interlocks, and make safe still works. Look at the values, then try again.'
    return data(refused({ code: 'app-silent', sentence }), { status: 503 })
  }
}
