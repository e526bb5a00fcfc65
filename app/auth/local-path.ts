const anywhere = 'http://site.invalid'

/**
 * A path of this site to go on to, or the start page: never another site's. It is read as a browser reads it, which takes a
 * backslash for a slash and drops tabs and line ends.
 */
export function localPath(value: unknown): string {
  if (typeof value !== 'string' || !value.startsWith('/') || !URL.canParse(value, anywhere)) return '/'
  const { origin, pathname, search, hash } = new URL(value, anywhere)
  return origin === anywhere && !pathname.startsWith('//') ? pathname + search + hash : '/'
}
