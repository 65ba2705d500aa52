/**
 * From text to YAML nodes. One pass of the library's lexer and parser gives its concrete syntax tree, and its composer
 * judges that tree; what the tree says is read from it directly. All scalars are text: what a number or a truth value
 * is, the format says. So `%YAML 1.1` changes nothing.
 */
import { Composer, type CST, Lexer, Parser } from 'yaml'
import { Cuts } from './cuts.ts'
import type { Problem, Span } from './model.ts'
import { blockSequences, dashOf, type Node, NothingNode, rootNode } from './nodes.ts'
import { findRuns, type Run } from './rows.ts'
import { Survey } from './survey.ts'
import { type SyntaxFault, syntaxFault, withoutConsequences } from './syntax.ts'

/** Larger files are refused. 200,000 atoms fit in. */
export const MOST_CHARACTERS = 8_000_000
/**
 * The most that the YAML library is given: what is left of the text without its regular lists of atoms. The library
 * takes some 200 bytes of memory and over a microsecond for each character.
 */
export const MOST_FOR_YAML = 500_000
/** Deeper nesting is refused, long before the library's recursion would end the process. A lattice file needs six levels. */
export const DEEPEST = 64
/** After so many faults of syntax in a document nobody reads on. */
const MOST_PROBLEMS = 100

export interface Comment {
  readonly at: Span
  readonly text: string
}

export interface YamlDocument {
  /** From its start marker, or the start of the file, up to the next document or the end of the file. */
  readonly at: Span
  readonly contents: Node
  readonly problems: readonly Problem[]
  /** Offsets, rising, at which a fault of syntax makes the meaning uncertain. */
  readonly doubts: readonly number[]
  /** The indentation or the like is at fault: what belongs to what is uncertain. */
  readonly uncertain: boolean
}

export interface YamlFile {
  readonly documents: readonly YamlDocument[]
  /** Faults that stand in no document. */
  readonly problems: readonly Problem[]
  /** In the order of the text. */
  readonly comments: readonly Comment[]
  /** Scalars that go over several lines, with the header of a block scalar, in the order of the text. */
  readonly multiline: readonly Span[]
  /** Tells, after the nodes have been used, whether somebody needed nodes that the short way does not make. */
  readonly rowsMissed: () => boolean
}

/** Read a text, long lists of atoms by the short way of `rows.ts`. Never throws. */
export function readYaml(text: string): YamlFile {
  const refusal = refuse(text)
  if (refusal) return nothingBut(refusal)
  const readable = withoutControls(text)
  const runs = findRuns(readable)
  return (runs.length > 0 && new Reading(text, readable, runs).read()) || readYamlWhole(text)
}

/** The same without the short way. */
export function readYamlWhole(text: string): YamlFile {
  const refusal = refuse(text)
  return refusal ? nothingBut(refusal) : new Reading(text, withoutControls(text), []).read()!
}

const nothingBut = (problem: Problem): YamlFile => ({
  documents: [],
  problems: [problem],
  comments: [],
  multiline: [],
  rowsMissed: () => false,
})

const syntax = (at: Span, message: string): Problem => ({ rule: 'yaml-syntax', at, message })

function refuse(text: string): Problem | undefined {
  if (text.length > MOST_CHARACTERS) return tooLarge(text.length, MOST_CHARACTERS, '')
  const ours = text.includes('<<<<<<<') ? /^<{7}(?: .*)?$/m.exec(text) : null
  if (!ours || !/^>{7}(?: .*)?$/m.test(text.slice(ours.index))) return undefined
  const at: Span = [ours.index, ours.index + ours[0].length]
  return syntax(
    at,
    'The two sides of a merge stand here side by side: keep one, and remove the lines that mark them.',
  )
}

function tooLarge(size: number, most: number, besides: string): Problem {
  const inWords = (n: number) => n.toLocaleString('en')
  return syntax(
    [0, 0],
    `The file has ${inWords(size)} characters${besides}; it is read up to ${inWords(most)}.`,
  )
}

/** YAML forbids them, and the library's lexer uses some as marks. */
const CONTROLS = /[\0-\x08\x0b\x0c\x0e-\x1f\x7f]/g

/** Of the same length, and without the characters by which the library's lexer talks to its parser. */
export const withoutControls = (text: string): string => text.replace(CONTROLS, '\ufffd')

/** The lexer's marks: a document begins, a collection in brackets ends too early, a scalar follows. */
const MARKS: ReadonlySet<string> = new Set(['\x02', '\x18', '\x1f'])
const SCALAR_FOLLOWS = '\x1f'
/** Tags that say what a value is anyway. */
const CORE_TAGS: ReadonlySet<string> = new Set([
  '!',
  '!!str',
  '!!int',
  '!!float',
  '!!bool',
  '!!null',
  '!!seq',
  '!!map',
])

/** Of the library or of our own. */
type Fault = Omit<SyntaxFault, 'kind'> & { readonly kind?: SyntaxFault['kind'] }

class Reading {
  private readonly cuts: Cuts
  private readonly documents: CST.Document[] = []
  private readonly comments: Comment[] = []
  private readonly multiline: Span[] = []
  private readonly tags: { readonly offset: number; readonly source: string }[] = []
  private readonly problems: Problem[] = []
  private nextTag = 0
  private missed = false

  constructor(
    private readonly original: string,
    /** Without control characters. */
    private readonly whole: string,
    private readonly runs: readonly Run[],
  ) {
    this.cuts = new Cuts(
      whole,
      runs.map(({ cut }) => cut),
    )
  }

  /** undefined where a run of rows is not what it looked like. */
  read(): YamlFile | undefined {
    const { text } = this.cuts
    if (text.length > MOST_FOR_YAML) {
      const besides = this.runs.length > 0 ? ' besides its plain lists of atoms' : ''
      return nothingBut(tooLarge(text.length, MOST_FOR_YAML, besides))
    }
    const faults = this.compose()
    const runs = verifiedRuns(this.documents, this.runs, this.cuts)
    if (!runs) return this.whole.length > MOST_FOR_YAML ? this.faultsAlone(faults) : undefined
    const documents = faults.map((own, i) => this.document(i, own, runs))
    this.addControls()
    this.addCommentsOfRuns()
    const { problems, comments, multiline } = this
    return { documents, problems, comments, multiline, rowsMissed: () => this.missed }
  }

  /** The rows are not a list of atoms, and the whole is too long to be read: what is wrong in the rest may say why. */
  private faultsAlone(faults: readonly SyntaxFault[][]): YamlFile {
    const documents = faults.map((own, i) => {
      const document = this.document(i, own, new Map())
      return { ...document, contents: new NothingNode(document.at, false, true) }
    })
    const { problems, comments, multiline } = this
    const told = [...problems, ...documents.flatMap(document => document.problems)]
    if (told.length === 0)
      return nothingBut(tooLarge(this.whole.length, MOST_FOR_YAML, ' that are no plain list of atoms'))
    return { documents, problems, comments, multiline, rowsMissed: () => false }
  }

  /** Lex, parse and compose in one pass. Gives the faults of each document. */
  private compose(): SyntaxFault[][] {
    const composer = new Composer({
      schema: 'failsafe',
      uniqueKeys: false,
      prettyErrors: false,
      logLevel: 'silent',
    })
    const all: SyntaxFault[][] = []
    const explained = (errors: Parameters<typeof syntaxFault>[0][]) =>
      errors.slice(0, MOST_PROBLEMS).map(error => syntaxFault(error, this.cuts.text))
    const take = (token: CST.Token) => {
      for (const { errors } of composer.next(token)) all.push(explained(errors))
      if (token.type === 'document') this.documents.push(token)
    }
    // The library makes an error of every fault; the stack of each would cost more than the rest of it.
    const { stackTraceLimit } = Error
    Error.stackTraceLimit = 0
    try {
      this.lex(take)
      for (const { errors } of composer.end()) all.push(explained(errors))
      // What no document follows, such as a directive at the end.
      for (const { start, end, message } of explained(composer.streamInfo().errors))
        this.problems.push(syntax(this.cuts.span(start, end), message))
    } catch {
      this.problems.push(syntax([0, 0], 'YAML gave up reading this file.'))
    } finally {
      Error.stackTraceLimit = stackTraceLimit
    }
    return all.slice(0, this.documents.length)
  }

  private lex(take: (token: CST.Token) => void): void {
    const parser = new Parser()
    let isScalar = false
    for (const lexeme of new Lexer().lex(this.cuts.text)) {
      this.note(lexeme, parser, isScalar)
      isScalar = !isScalar && lexeme === SCALAR_FOLLOWS
      for (const token of parser.next(lexeme)) take(token)
      // The stack holds the document and all collections that are open.
      if (parser.stack.length <= DEEPEST + 1) continue
      const at = this.cuts.span(Math.max(0, parser.offset - 1), parser.offset)
      const message = `Lists and mappings are nested over ${DEEPEST} levels deep here: the document is not read.`
      this.problems.push(syntax(at, message))
      return
    }
    for (const token of parser.end()) take(token)
  }

  /** Comments, tags and long scalars are met in passing, in the order of the text. */
  private note(lexeme: string, { offset, stack }: Parser, isScalar: boolean): void {
    if (!isScalar && MARKS.has(lexeme)) return
    const first = lexeme[0]
    if (isScalar || first === '"' || first === "'") {
      const open = stack[stack.length - 1]
      const header = isScalar && open?.type === 'block-scalar' ? open.offset : offset
      const content = lexeme.trimEnd()
      if (header < offset || content.includes('\n'))
        this.multiline.push(this.cuts.span(header, offset + content.length))
    } else if (first === '#') {
      this.comments.push({ at: this.cuts.span(offset, offset + lexeme.length), text: lexeme })
    } else if (first === '!') this.tags.push({ offset, source: lexeme })
  }

  private document(
    i: number,
    composed: readonly SyntaxFault[],
    runs: ReadonlyMap<CST.CollectionItem, Run>,
  ): YamlDocument {
    const token = this.documents[i]
    const end = this.documents[i + 1]?.offset ?? this.cuts.text.length
    const at: Span = [
      i === 0 ? 0 : this.cuts.back(token.offset),
      end === this.cuts.text.length ? this.whole.length : this.cuts.back(end),
    ]
    const survey = new Survey(token)
    const { unclosed } = survey
    const known = unclosed.length > 0 ? composed.filter(({ kind }) => kind !== 'unclosed') : composed
    const all: Fault[] = [...known, ...survey.faults, ...unclosed]
    const faults = withoutConsequences(all, this.cuts.text)
    const uncertain = composed.some(({ kind }) => kind === 'structure')
    const problems = faults.map(fault => syntax(this.cuts.span(fault.start, fault.end), fault.message))
    problems.push(...this.strangeTags(end))
    const marks = [...all.map(({ start }) => start), ...unclosed.map(({ certain }) => certain)].sort(
      (a, b) => a - b,
    )
    const doubts = marks.map(mark => this.cuts.back(mark))
    if (survey.excessive)
      return { at, problems, doubts, uncertain, contents: new NothingNode(at, false, true) }
    const missRows = () => {
      this.missed = true
    }
    const tree = { cuts: this.cuts, anchors: survey, faults: marks, runs, missRows }
    return { at, problems, doubts, uncertain, contents: rootNode(tree, token.value, token.offset) }
  }

  /** Documents are asked in their order, so each tag is looked at once. */
  private strangeTags(to: number): Problem[] {
    const strange: Problem[] = []
    for (; this.tags[this.nextTag]?.offset < to; this.nextTag++) {
      const { offset, source } = this.tags[this.nextTag]
      if (CORE_TAGS.has(source)) continue
      const at = this.cuts.span(offset, offset + source.length)
      strange.push({
        rule: 'value-type',
        at,
        message: `The tag \`${source}\` means nothing in a lattice file.`,
      })
    }
    return strange
  }

  private addControls(): void {
    CONTROLS.lastIndex = 0
    const found = CONTROLS.exec(this.original)
    if (!found) return
    const number = found[0].charCodeAt(0).toString(16).toUpperCase().padStart(4, '0')
    const message = `A control character (U+${number}) stands here, which YAML forbids. Is this a text in UTF-8?`
    this.problems.unshift(syntax([found.index, found.index + 1], message))
  }

  private addCommentsOfRuns(): void {
    if (this.runs.length === 0) return
    for (const { comments } of this.runs)
      for (const { from, to } of comments)
        this.comments.push({ at: [from, to], text: this.whole.slice(from, to) })
    this.comments.sort((a, b) => a.at[0] - b.at[0])
  }
}

/** Each run by the item of its first row; undefined where one of them is not there. */
export function verifiedRuns(
  documents: readonly CST.Document[],
  runs: readonly Run[],
  cuts: Cuts,
): Map<CST.CollectionItem, Run> | undefined {
  const verified = new Map<CST.CollectionItem, Run>()
  if (runs.length === 0) return verified
  const byDash = new Map(runs.map(run => [run.rows[0].dash, run]))
  for (const { value } of documents) {
    for (const { items } of blockSequences(value)) {
      for (const [i, item] of items.entries()) {
        const dash = dashOf(item)
        const run = dash && byDash.get(cuts.back(dash.offset))
        if (!run) continue
        const last = i + 1 < items.length ? dashOf(items[i + 1]) : undefined
        if (!last || cuts.back(last.offset) !== run.rows[run.rows.length - 1].dash) return undefined
        verified.set(item, run)
      }
    }
  }
  return verified.size === runs.length ? verified : undefined
}
