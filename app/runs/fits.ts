/** Lines through a series of readings, and how each is fitted. The names stand in addresses and in the database. */
export const lines = ['origin', 'intercept', 'root'] as const
export type LineKind = (typeof lines)[number]

export const methods = ['ordinary', 'weighted', 'both-errors'] as const
export type Method = (typeof methods)[number]

export const fits = [
  'general',
  ...lines.flatMap((line) => methods.map((method) => `${line}:${method}` as const)),
] as const
export type Fit = 'general' | `${LineKind}:${Method}`

export const lineWords: Record<LineKind, string> = {
  origin: 'V against (kIgr)²/2 through the origin',
  intercept: 'V against (kIgr)²/2 with an intercept',
  root: '√(2V)/r against kIg',
}

export const methodWords: Record<Method, string> = {
  ordinary: 'ordinary least squares',
  weighted: 'weighted by the uncertainties of the ordinate',
  'both-errors': 'uncertainties of both coordinates',
}

export const fitWords: Record<Fit, string> = {
  general: 'the general model',
  ...(Object.fromEntries(
    lines.flatMap((line) =>
      methods.map((method) => [`${line}:${method}`, `${lineWords[line]}, ${methodWords[method]}`]),
    ),
  ) as Record<`${LineKind}:${Method}`, string>),
}
