/**
 * Fills a form: LiquidJS, told to be strict and kept on a short lead. It reaches no file, runs no code, sees plain data
 * only, and what it takes and gives is bounded. It works at once and cannot be interrupted but from outside: where that
 * is possible it belongs in a thread.
 */
import {
  Context,
  Drop,
  type Emitter,
  evalToken,
  ForTag,
  IncludeTag,
  Liquid,
  LiquidError,
  Parser,
  RenderTag,
  type TagToken,
  type Template,
  type Token,
  TokenKind,
  Tokenizer,
  type TopLevelToken,
  toValueSync,
  UndefinedVariableError,
} from 'liquidjs'
import type { Unit } from '../../crystal/units.ts'
import { nearest } from '../../format/nearest.ts'
import { FILTER_NAMES, installFilters } from './filters.ts'
import { FORM_LIMITS, type FormFault, type FormJob, type FormOutcome, LONGEST_FORM } from './form.ts'
import { outsideOf } from './partials.ts'
import { FormProblem } from './problem.ts'

/** The tags that forms may use. `capture` and the layouts are left out: their text would be held without a limit. */
export const TAGS = [
  ...['for', 'break', 'continue', 'if', 'unless', 'case', 'assign', 'cycle', 'increment', 'decrement'],
  ...['render', 'include', 'comment', '#', 'raw', 'liquid', 'echo'],
]

/** Partials within partials. */
const DEEPEST = 16
/** New list items and letters that one step may make: ranges, joined words. */
const LARGEST_STEP = 20_000_000
/** All steps together. */
const LARGEST_SUM = 1_000_000_000

export function fillForm(job: FormJob): FormOutcome {
  const { milliseconds, characters } = job.limits ?? FORM_LIMITS
  const engine = new FormEngine(job)
  const paper = new Paper(characters)
  try {
    const context = new FormContext(Object.create(null), engine.options, {
      globals: job.data,
      sync: true,
      strictVariables: true,
      ownPropertyOnly: true,
    })
    context.liquid = engine
    context.memoryLimit = new StepLimit() as unknown as Context['memoryLimit']
    context.renderLimit = new TimeLimit(milliseconds) as unknown as Context['renderLimit']
    const templates = engine.parse(job.text, job.name)
    toValueSync(engine.renderer.renderTemplates(templates, context, paper))
    return { text: paper.buffer }
  } catch (error) {
    return { fault: faultOf(error, job, engine) }
  }
}

/** Takes what the form says, and only what can be said. */
class Paper implements Emitter {
  buffer = ''

  constructor(private readonly most: number) {}

  write(value: unknown): void {
    this.buffer += sayable(value)
    if (this.buffer.length > this.most)
      throw new FormProblem(`the text would be longer than ${this.most.toLocaleString('en')} characters`)
  }

  /** Of the text since then. */
  dropLineBreak(since: number): void {
    if (this.buffer.length > since && this.buffer.endsWith('\n'))
      this.buffer = this.buffer.slice(0, this.buffer.endsWith('\r\n') ? -2 : -1)
  }
}

function sayable(value: unknown): string {
  if (typeof value === 'string') return value
  if (typeof value === 'number' && Number.isFinite(value)) return String(value)
  if (typeof value === 'boolean') return String(value)
  if (value === null || value === undefined) throw new Absent()
  if (typeof value === 'number') throw new FormProblem('this is no finite number')
  if (Array.isArray(value)) throw new FormProblem('this is a list: go through it with `for`, or use `join`')
  throw new FormProblem('this is a group of values: name the one that is meant')
}

/** Something was to be written or gone through that the lattice file has no ground for. */
class Absent extends FormProblem {}

class StepLimit {
  #sum = 0

  use(count: unknown): void {
    const size = Number(count)
    if (!(size > 0)) return
    this.#sum += size
    if (size > LARGEST_STEP || this.#sum > LARGEST_SUM)
      throw new FormProblem(
        `this makes ${size > LARGEST_STEP ? 'a list or word' : 'lists and words'} too long to be held`,
      )
  }
}

class TimeLimit {
  readonly #end: number

  constructor(private readonly milliseconds: number) {
    this.#end = performance.now() + milliseconds
  }

  /** The clock that is handed over is another one in a worker of the browser. */
  check(): void {
    if (performance.now() > this.#end)
      throw new FormProblem(
        `the form takes longer than ${this.milliseconds / 1000} s: is there a loop without end?`,
      )
  }
}

/** The words of a loop about itself. */
const LOOP_WORDS = ['index', 'index0', 'rindex', 'rindex0', 'first', 'last', 'length']

class FormContext extends Context {
  override readProperty(from: object, key: string | number | Drop): unknown {
    const value = this.#own(from, key) ? super.readProperty(from as never, key as never) : undefined
    if (value === undefined) this.engine.missed = { from, key, context: this }
    return value
  }

  override spawn(scope = {}): Context {
    const { opts, globals, memoryLimit, renderLimit, liquid } = this
    const options = { globals, sync: true, strictVariables: true, ownPropertyOnly: true }
    return new FormContext(scope, opts, options, { memoryLimit, renderLimit, liquid })
  }

  get engine(): FormEngine {
    return this.liquid
  }

  #own(from: unknown, key: unknown): boolean {
    if (from instanceof Drop) return LOOP_WORDS.includes(String(key))
    return from !== this.globals || Object.hasOwn(this.globals, key as string)
  }
}

interface Missed {
  readonly from: unknown
  readonly key: unknown
  readonly context: FormContext
}

class FormEngine extends Liquid {
  missed: Missed | undefined
  depth = 0
  readonly #parsed = new Map<string, Template[]>()
  readonly #names = new Map<string, string>()

  constructor(private readonly job: FormJob) {
    super({ strictVariables: true, strictFilters: true, ownPropertyOnly: true, templates: {}, greedy: false })
    installFilters(this, job.data.unit as Unit)
    for (const name of Object.keys(this.tags)) if (!TAGS.includes(name)) delete this.tags[name]
    this.registerTag('for', StrictFor)
    this.registerTag('render', BoundedRender)
    this.registerTag('include', BoundedInclude)
  }

  /** Not every token knows its file, but all know the text that they stand in. */
  nameOf(token: Token | undefined): string {
    return token?.file ?? this.#names.get(token?.input ?? '') ?? this.job.name
  }

  override parse(text: string, name?: string): Template[] {
    if (text.length > LONGEST_FORM)
      throw new FormProblem(`a form of over ${LONGEST_FORM.toLocaleString('en')} characters is not read`)
    if (name !== undefined) this.#names.set(text, name)
    const tokens = new Tokenizer(text, this.options.operators, name).readTopLevelTokens(this.options)
    takeTagLines(tokens)
    return new Parser(this).parseTokens(tokens)
  }

  // biome-ignore lint/correctness/useYield: the engine drives a generator here.
  override *_parsePartialFile(name: string): Generator<unknown, Template[], string | Template[]> {
    const known = this.#parsed.get(name)
    if (known) return known
    const outside = outsideOf(name)
    if (outside) throw new FormProblem(`"${name}": ${outside}`)
    const text = Object.hasOwn(this.job.partials, name) ? this.job.partials[name] : null
    if (text === null) throw new FormProblem(`there is no partial "${name}" in the folder of the form`)
    const templates = this.parse(text, name)
    this.#parsed.set(name, templates)
    return templates
  }
}

/** A loop over what is absent would leave its lines out in silence. */
class StrictFor extends ForTag {
  override *render(context: Context, emitter: Emitter): Generator<unknown, string | undefined, never> {
    const over = yield evalToken(this.collection, context)
    if (over === null || over === undefined) throw new Absent()
    return (yield* super.render(context, emitter)) ?? undefined
  }
}

class BoundedRender extends RenderTag {
  override *render(context: Context, emitter: Emitter): Generator<unknown, void, unknown> {
    yield* within(this, context, emitter, super.render(context, emitter))
  }
}

class BoundedInclude extends IncludeTag {
  override *render(context: Context, emitter: Emitter): Generator<unknown, void, unknown> {
    yield* within(this, context, emitter, super.render(context, emitter))
  }
}

/** A partial ends with a line break because files do: the line that names it has one of its own. */
function* within(
  tag: object,
  context: Context,
  paper: Emitter,
  steps: Generator<unknown, void, unknown>,
): Generator<unknown, void, unknown> {
  const { engine } = context as FormContext
  if (typeof (tag as { file: unknown }).file !== 'string')
    throw new FormProblem('the name of a partial stands in quotes, as it is')
  if (engine.depth >= DEEPEST)
    throw new FormProblem(`partials name each other more than ${DEEPEST} deep: do they run in a circle?`)
  engine.depth++
  const start = paper.buffer.length
  try {
    yield* steps
    if (paper instanceof Paper) paper.dropLineBreak(start)
  } finally {
    engine.depth--
  }
}

interface Trimmed extends Token {
  trimLeft: number
  trimRight: number
}

/** A line that holds nothing but tags, none of which writes, leaves no line behind. */
function takeTagLines(tokens: readonly TopLevelToken[]): void {
  for (let first = 0; first < tokens.length; first++) {
    if (!isTag(tokens[first])) continue
    let last = endOfComment(tokens, first)
    while (isTag(tokens[last + 1]) || (isTag(tokens[last + 2]) && isBlank(tokens[last + 1])))
      last = endOfComment(tokens, last + (isTag(tokens[last + 1]) ? 1 : 2))
    const writes = tokens.slice(first, last + 1).some(token => WRITING.has((token as TagToken).name))
    const before = tokens[first - 1] as Trimmed | undefined
    const after = tokens[last + 1] as Trimmed | undefined
    const indent = before ? /(?:^|\n)([ \t]*)$/.exec(contents(before)) : ['', '']
    const rest = after ? /^[ \t\r]*(?:\n|$)/.exec(contents(after)) : ['']
    // Text that goes on to another token ends no line.
    const startsLine = indent && (!before || before.begin === 0 || contents(before).includes('\n'))
    const endsLine = rest && (!after || rest[0].endsWith('\n') || tokens.length === last + 2)
    if (startsLine && endsLine && !writes) {
      if (before) before.trimRight = Math.max(before.trimRight, indent[1].length)
      for (const between of tokens.slice(first + 1, last) as unknown as Trimmed[])
        if (between.kind === TokenKind.HTML) between.trimLeft = between.end - between.begin
      if (after) after.trimLeft = Math.max(after.trimLeft, rest[0].length)
    }
    first = last
  }
}

const WRITING: ReadonlySet<string> = new Set([
  ...['render', 'include', 'echo', 'cycle', 'increment', 'decrement', 'liquid', 'raw', 'endraw'],
])

/** A comment is one tag with all that is in it. */
function endOfComment(tokens: readonly TopLevelToken[], start: number): number {
  if ((tokens[start] as TagToken).name !== 'comment') return start
  const end = tokens.findIndex(
    (token, i) => i > start && isTag(token) && (token as TagToken).name === 'endcomment',
  )
  return end < 0 ? start : end
}

const isTag = (token: Token | undefined): boolean => token?.kind === TokenKind.Tag
const contents = (token: Token): string => (token.kind === TokenKind.HTML ? token.getText() : '{')
const isBlank = (token: Token): boolean => token.kind === TokenKind.HTML && /^[ \t]*$/.test(token.getText())

function faultOf(error: unknown, job: FormJob, engine: FormEngine): FormFault {
  const original = LiquidError.is(error) ? ((error as LiquidError).originalError ?? error) : error
  const problem = original instanceof FormProblem ? original : undefined
  const token = problem?.token ?? (LiquidError.is(error) ? (error as LiquidError).token : undefined)
  const { message, begin } = words(error, original as Error, token, job, engine)
  return {
    form: engine.nameOf(token),
    ...placeOf(token?.input ?? job.text, begin ?? token?.begin ?? 0),
    message: message.replace(/\s+/g, ' ').slice(0, LONGEST_MESSAGE),
  }
}
const LONGEST_MESSAGE = 500

interface Words {
  readonly message: string
  /** Where it is nearer than the token. */
  readonly begin?: number
}

function words(
  error: unknown,
  original: Error,
  token: Token | undefined,
  { reasons }: FormJob,
  engine: FormEngine,
): Words {
  if (error instanceof UndefinedVariableError && engine.missed)
    return missing(engine.missed, (original as Error & { variableName: string }).variableName)
  if (original instanceof Absent) return absent(token, reasons)
  if (original instanceof FormProblem) return { message: original.message }
  if (original instanceof RangeError) return { message: 'the form is nested too deeply' }
  // What LiquidJS appends is said by our own line already.
  const message = original.message.replace(/(, file:[^\n]*)?, line:\d+, col:\d+$/, '')
  const [, filter] = /^undefined filter: (.*)$/.exec(message) ?? []
  if (filter !== undefined)
    return {
      message: `there is no filter ${filter}${meant(filter, FILTER_NAMES)}`,
      begin: filterIn(token, filter),
    }
  const [, tag] = /^tag "(.*)" not found$/.exec(message) ?? []
  if (tag !== undefined) return { message: `there is no tag ${tag}${meant(tag, TAGS)}` }
  return { message }
}

const meant = (word: string, known: Iterable<string>): string => {
  const near = nearest(word, known)
  return near === undefined ? '' : `; did you mean ${near}?`
}

function filterIn(token: Token | undefined, name: string): number | undefined {
  const found =
    token && new RegExp(`\\|\\s*(?=${name.replace(/\W/g, '\\$&')}(?![\\w-]))`).exec(token.getText())
  return found ? token.begin + found.index + found[0].length : undefined
}

function missing({ from, key, context }: Missed, path: string): Words {
  const asked = written(path)
  if (Array.isArray(from)) {
    const entries = from.length === 1 ? '1 entry' : `${from.length} entries`
    if (typeof key === 'number')
      return { message: `there is no \`${asked}\`: the list has ${entries}, counted from 0` }
    return { message: `there is no \`${asked}\`: a list has \`[0]\`, \`size\`, \`first\` and \`last\`` }
  }
  if (typeof from !== 'object' || from === null)
    return {
      message: `there is no \`${asked}\`: ${typeof from === 'string' ? 'a word' : 'a number'} has no parts`,
    }
  const top = from === context.globals || !isData(from)
  const near = nearest(String(key), Object.keys(top ? context.getAll() : from))
  const whole = path.slice(0, path.length - String(key).length)
  return { message: `there is no \`${asked}\`${near ? `; did you mean \`${written(whole + near)}\`?` : ''}` }
}

/** `a.0.b` as a form writes it: `a[0].b`. */
const written = (path: string): string => path.replace(/\.(\d+)(?=\.|$)/g, '[$1]')

const isData = (from: object): boolean =>
  Object.getPrototypeOf(from) === Object.prototype || Array.isArray(from)

function absent(token: Token | undefined, reasons: Readonly<Record<string, string>>): Words {
  const text = token?.getText() ?? ''
  const [, name] =
    /^(?:\{\{-?|\{%-?\s*echo)\s*([\w.[\]-]+)/.exec(text) ?? /\bin\s+([\w.[\]-]+)/.exec(text) ?? []
  const [root] = name?.split(/[.[]/) ?? []
  const reason =
    root !== undefined && Object.hasOwn(reasons, root) ? reasons[root] : 'the lattice file does not give it'
  return { message: `${name ? `\`${name}\`` : 'this'} has no value: ${reason}` }
}

/** Line and column of an offset, from 1, columns in characters. */
function placeOf(text: string, offset: number): { line: number; column: number } {
  const before = text.slice(0, offset)
  const start = before.lastIndexOf('\n') + 1
  return { line: before.split('\n').length, column: [...before.slice(start)].length + 1 }
}
