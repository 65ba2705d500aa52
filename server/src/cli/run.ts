/** The command `braggline`: picks the verb, and turns everything that goes wrong into one line and a status. */
import { harmless, inColumns, wrap } from '../exchange/layout.ts'
import { nearest } from '../format/nearest.ts'
import { bands } from './bands.ts'
import { check } from './check.ts'
import { draw } from './draw.ts'
import { Engine, type Symmetries } from './engine.ts'
import { explain } from './explain.ts'
import { fill } from './fill.ts'
import { exportVerb } from './export.ts'
import { fold } from './fold.ts'
import { importVerb } from './import.ts'
import { type Io, Refusal } from './io.ts'
import { match } from './match.ts'
import { mesh } from './mesh.ts'
import { HELP, type OptionSpec, readOptions } from './options.ts'
import { path } from './path.ts'
import { probe } from './probe.ts'
import { report } from './report.ts'
import { serve } from './serve.ts'
import { CLEAN, NOT_DONE, type Verb } from './verb.ts'
import { VERSION } from './version.ts'

export const VERBS: readonly Verb[] = [
  check,
  report,
  path,
  mesh,
  probe,
  match,
  fold,
  bands,
  draw,
  fill,
  importVerb,
  exportVerb,
  explain,
  serve,
]

const WIDTH = 92

/**
 * @param argv       what follows the command's own name.
 * @param symmetries makes the service that searches for symmetry; asked at most once.
 * @returns the exit status.
 */
export async function run(argv: readonly string[], io: Io, symmetries: () => Symmetries): Promise<number> {
  try {
    const [name, ...args] = argv
    if (name === '--help' || name === '-h') return say(io, overview())
    if (name === '--version') return say(io, `${VERSION}\n`)
    if (name === undefined) throw new Refusal('no verb is given; `braggline --help` lists them')
    const verb = VERBS.find(verb => verb.name === name)
    if (!verb) throw new Refusal(unknownVerb(name))
    const given = readOptions(args, [...verb.options, HELP])
    if (given.has('help')) return say(io, helpOf(verb))
    let engine: Engine | undefined
    return await verb.run({ given, io, engine: () => (engine ??= new Engine(symmetries())) })
  } catch (error) {
    if (!(error instanceof Refusal)) throw error
    io.err.write(`braggline: ${harmless(error.message)}\n`)
    return NOT_DONE
  }
}

function say(io: Io, text: string): number {
  io.out.write(text)
  return CLEAN
}

function unknownVerb(name: string): string {
  if (name.startsWith('-'))
    return `unknown option ${name} before a verb; \`braggline --help\` lists the verbs`
  const near = nearest(
    name,
    VERBS.map(verb => verb.name),
  )
  return `unknown verb ${name}${near ? `; did you mean ${near}?` : ''} (\`braggline --help\` lists them)`
}

const overview = (): string =>
  `${[
    `braggline ${VERSION}: checks lattice files and tells what they mean.`,
    '',
    ...inColumns(
      VERBS.map(({ name, operands, summary }) => [`  braggline ${name} ${operands}`, summary]),
      ['left', 'left'],
    ),
    '',
    ...wrap(
      'FILE is a file, a folder (searched for *.lattice.yaml), a glob, or - for standard input.',
      WIDTH,
    ),
    ...wrap('`braggline VERB --help` tells the options of a verb, `braggline --version` the version.', WIDTH),
    ...wrap('Exit status: 0 clean, 1 findings at or over --fail-on, 2 the work could not be done.', WIDTH),
  ].join('\n')}\n`

const helpOf = ({ name, operands, about, options, examples }: Verb): string =>
  `${[
    `braggline ${name} ${operands}`,
    '',
    ...about.flatMap(paragraph => [...wrap(paragraph, WIDTH), '']),
    ...inColumns([...options, HELP].map(optionLine), ['left', 'left']),
    '',
    examples.length > 1 ? 'Examples:' : 'Example:',
    ...examples.map(example => `  ${example}`),
  ].join('\n')}\n`

const optionLine = ({ name, short, value, help }: OptionSpec): string[] => [
  `  --${name}${value ? ` ${value}` : ''}${short ? `, -${short}` : ''}`,
  help,
]
