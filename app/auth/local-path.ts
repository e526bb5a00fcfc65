/** A path of this site to go on to, or the start page: never another site's. */
export function localPath(value: unknown): string {
  return typeof value === 'string' && /^\/(?![/\\])/.test(value) ? value : '/'
}
