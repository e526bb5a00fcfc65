import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import ts from 'typescript'
import { describe, expect, it } from 'vitest'

type Import = { from: string; to: string; isTypeOnly: boolean }

/** Every import of a source file: to a file of this project by its path, to a package by its name. */
function importsOf(file: string): Import[] {
  const source = ts.createSourceFile(file, readFileSync(file, 'utf8'), ts.ScriptTarget.Latest, false)
  const found: Import[] = []
  const add = (specifier: ts.Expression | undefined, isTypeOnly: boolean) => {
    if (specifier && ts.isStringLiteral(specifier))
      found.push({ from: file, to: resolve(file, specifier.text), isTypeOnly })
  }
  const visit = (node: ts.Node) => {
    if (ts.isImportDeclaration(node))
      add(node.moduleSpecifier, node.importClause?.phaseModifier === ts.SyntaxKind.TypeKeyword)
    else if (ts.isExportDeclaration(node)) add(node.moduleSpecifier, node.isTypeOnly)
    else if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword)
      add(node.arguments[0], false)
    ts.forEachChild(node, visit)
  }
  visit(source)
  return found
}

function resolve(file: string, specifier: string): string {
  if (specifier.startsWith('.')) return join(dirname(file), specifier)
  return specifier.startsWith('#') ? specifier.slice(1) : specifier
}

const files = ['app', 'bridge'].flatMap((folder) =>
  readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => /\.tsx?$/.test(name))
    .map((name) => join(folder, name)),
)
const all = files.flatMap(importsOf)

/** What each pure folder may import besides itself. */
const pure: Record<string, string[]> = {
  'app/physics': [],
  'app/statistics': [],
  'app/metrology': ['app/statistics'],
  'app/analysis': ['app/physics', 'app/statistics', 'app/metrology'],
  'app/relation': ['app/physics', 'mathjs'],
  'app/safety': [],
  'app/protocol': ['app/safety', 'zod'],
}

const isIn = (path: string, folder: string) => path === folder || path.startsWith(`${folder}/`)
const words = (imports: Import[]) => imports.map(({ from, to }) => `${from} imports ${to}`)

describe('The directions of imports', () => {
  it('are read from real files', () => {
    for (const folder of [...Object.keys(pure), 'bridge', 'app/routes'])
      expect(
        files.filter((file) => isIn(file, folder)),
        folder,
      ).not.toEqual([])
  })

  it.each(Object.entries(pure))('%s imports only itself and %j', (folder, allowed) => {
    const wrong = all.filter(
      ({ from, to }) => isIn(from, folder) && ![folder, ...allowed].some((it) => isIn(to, it)),
    )
    expect(words(wrong)).toEqual([])
  })

  it('the bridge imports the pure folders and nothing else of the app', () => {
    const wrong = all.filter(
      ({ from, to }) =>
        isIn(from, 'bridge') && isIn(to, 'app') && !Object.keys(pure).some((folder) => isIn(to, folder)),
    )
    expect(words(wrong)).toEqual([])
  })

  it('the app never imports the bridge', () => {
    expect(words(all.filter(({ from, to }) => isIn(from, 'app') && isIn(to, 'bridge')))).toEqual([])
  })

  it('the accepted value is imported only by server modules, the bridge and the simulator', () => {
    const wrong = all.filter(
      ({ from, to }) =>
        to.startsWith('app/physics/accepted-value') && !isIn(from, 'bridge') && !/\.server\.tsx?$/.test(from),
    )
    expect(words(wrong)).toEqual([])
  })

  it('components, charts and telemetry take no more than types from server modules and routes', () => {
    const wrong = all.filter(
      ({ from, to, isTypeOnly }) =>
        ['app/components', 'app/charts', 'app/telemetry'].some((folder) => isIn(from, folder)) &&
        !isTypeOnly &&
        (/\.server(\.tsx?)?$/.test(to) || isIn(to, 'app/routes') || isIn(to, 'app/db')),
    )
    expect(words(wrong)).toEqual([])
  })

  it('no module imports a route module but for its types', () => {
    const wrong = all.filter(
      ({ from, to, isTypeOnly }) =>
        from !== 'app/routes.ts' && isIn(to, 'app/routes') && !isTypeOnly && !to.includes('+types'),
    )
    expect(words(wrong)).toEqual([])
  })

  it('areas do not import components or routes', () => {
    const areas = [
      'app/benches',
      'app/runs',
      'app/imports',
      'app/people',
      'app/bridge-link',
      'app/auth',
      'app/db',
      'app/mail',
      'app/files',
    ]
    const wrong = all.filter(
      ({ from, to }) =>
        areas.some((area) => isIn(from, area)) &&
        ['app/components', 'app/charts', 'app/telemetry', 'app/routes'].some((folder) => isIn(to, folder)),
    )
    expect(words(wrong)).toEqual([])
  })
})
