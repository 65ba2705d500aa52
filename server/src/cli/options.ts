/** Reading a command line by a table of options, which its help is written from too. */
import { parseArgs } from 'node:util'
import { nearest } from '../format/nearest.ts'
import { Refusal } from './io.ts'

export interface OptionSpec {
  readonly name: string
  readonly short?: string
  /** What stands for the value in the help; none: the option is a switch. */
  readonly value?: string
  /** The only values that are allowed. */
  readonly choices?: readonly string[]
  readonly repeatable?: boolean
  readonly help: string
}

export interface Given {
  readonly operands: readonly string[]
  has(name: string): boolean
  /** The last value of an option. */
  value(name: string): string | undefined
  values(name: string): readonly string[]
}

export const HELP: OptionSpec = { name: 'help', short: 'h', help: 'This text.' }

/** @throws Refusal for anything that is not in the table. */
export function readOptions(args: readonly string[], specs: readonly OptionSpec[]): Given {
  const options = Object.fromEntries(
    specs.map(({ name, short, value }) => [
      name,
      { type: value ? ('string' as const) : ('boolean' as const), ...(short ? { short } : {}) },
    ]),
  )
  // Not strict: its complaints run over several lines and name no near spelling.
  const { tokens } = parseArgs({
    args: [...args],
    options,
    strict: false,
    allowPositionals: true,
    tokens: true,
  })
  const values = new Map<string, string[]>()
  const operands: string[] = []
  for (const token of tokens) {
    if (token.kind === 'positional') operands.push(token.value)
    if (token.kind !== 'option') continue
    const spec = specs.find(({ name }) => name === token.name)
    if (!spec) throw new Refusal(unknown(token.rawName, specs))
    values.set(spec.name, [...(values.get(spec.name) ?? []), accepted(spec, token.rawName, token.value)])
    if (!spec.repeatable && spec.value && values.get(spec.name)!.length > 1)
      throw new Refusal(`${token.rawName} is given twice`)
  }
  return {
    operands,
    has: name => values.has(name),
    value: name => values.get(name)?.at(-1),
    values: name => values.get(name) ?? [],
  }
}

function unknown(rawName: string, specs: readonly OptionSpec[]): string {
  const near = nearest(
    rawName.replace(/^-+/, ''),
    specs.map(({ name }) => name),
  )
  return `unknown option ${rawName}${near ? `; did you mean --${near}?` : ''}`
}

function accepted({ value, choices }: OptionSpec, rawName: string, given: string | undefined): string {
  if (!value) {
    if (given !== undefined) throw new Refusal(`${rawName} takes no value`)
    return ''
  }
  if (given === undefined || given === '')
    throw new Refusal(`${rawName} needs a value: ${choices?.join(', ') ?? value}`)
  if (choices && !choices.includes(given)) {
    const near = nearest(given, choices)
    throw new Refusal(
      `${rawName} ${given} is not known${near ? `; did you mean ${near}?` : ''} (${choices.join(', ')})`,
    )
  }
  return given
}

/** A whole number from 1. */
export function ordinal(given: Given, name: string): number | undefined {
  const text = given.value(name)
  if (text === undefined) return undefined
  if (!/^[1-9]\d{0,8}$/.test(text)) throw new Refusal(`--${name} ${text} is no whole number from 1`)
  return Number(text)
}
