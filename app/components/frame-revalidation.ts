import type { ShouldRevalidateFunction } from 'react-router'

const changesNoFrame = /^\/(benches|runs|make-safe)(\/|$)/

/**
 * For the routes around a page: who is signed in and the room light are not read anew when only the page's own data are,
 * nor after what is done on a bench. A web application that dies at that moment would take the page away, and its make
 * safe with it.
 */
export const frameRevalidation: ShouldRevalidateFunction = ({
  formAction,
  currentUrl,
  nextUrl,
  defaultShouldRevalidate,
}) => {
  const isSamePage = currentUrl.href === nextUrl.href
  const isOfFrame = formAction !== undefined && !changesNoFrame.test(formAction)
  return isSamePage && !isOfFrame ? false : defaultShouldRevalidate
}
