import { isForm, type Parameters } from './parameters.ts'

type Node = { form: string; optional: boolean; suffixed: boolean }

/** A header that an instrument knows, and what it does with the parameters that follow. */
export type Command = {
  header: string
  isQuery: boolean
  nodes: Node[]
  /** Reads all parameters before anything is changed, then acts. A query gives its answer. */
  execute(parameters: Parameters, suffix: number | undefined): string | undefined
}

/**
 * Describes a command. `header` is in SCPI notation: capitals are the short form, square brackets are optional
 * nodes, `#` marks a node that takes a numeric suffix, and a query ends in `?`.
 */
export function command<T>(
  header: string,
  read: (parameters: Parameters, suffix: number | undefined) => T,
  run: (values: T) => string | undefined,
): Command {
  return {
    header,
    isQuery: header.endsWith('?'),
    nodes: nodesOf(header),
    execute(parameters, suffix) {
      const values = read(parameters, suffix)
      parameters.end()
      return run(values)
    },
  }
}

/** For commands without parameters. */
export function nothing(): undefined {
  return undefined
}

function nodesOf(header: string): Node[] {
  return [...header.matchAll(/(\[)?:?([A-Za-z]+)(#)?/g)].map(([, bracket, form = '', suffix]) => ({
    form,
    optional: bracket !== undefined,
    suffixed: suffix !== undefined,
  }))
}

/** The command that a header names, with its numeric suffix where one was sent; null when there is none. */
export function findCommand(
  commands: readonly Command[],
  mnemonics: readonly string[],
  isQuery: boolean,
): { command: Command; suffix: number | undefined } | null {
  for (const command of commands) {
    if (command.isQuery !== isQuery) continue
    const suffix: { value: number | undefined } = { value: undefined }
    if (matches(command.nodes, 0, mnemonics, 0, suffix)) return { command, suffix: suffix.value }
  }
  return null
}

function matches(
  nodes: readonly Node[],
  nodeIndex: number,
  mnemonics: readonly string[],
  index: number,
  suffix: { value: number | undefined },
): boolean {
  const node = nodes[nodeIndex]
  if (!node) return index === mnemonics.length
  const mnemonic = mnemonics[index]
  if (mnemonic !== undefined) {
    const digits = node.suffixed ? (/\d+$/.exec(mnemonic)?.[0] ?? '') : ''
    const word = digits === '' ? mnemonic : mnemonic.slice(0, -digits.length)
    if (isForm(word, node.form) && matches(nodes, nodeIndex + 1, mnemonics, index + 1, suffix)) {
      if (digits !== '') suffix.value = Number(digits)
      return true
    }
  }
  return node.optional && matches(nodes, nodeIndex + 1, mnemonics, index, suffix)
}
