/** Findings as SARIF 2.1.0 (OASIS standard, 2020), for code-scanning services and viewers. */
import type {
  Fix as SarifFix,
  Location,
  Log,
  Region as SarifRegion,
  ReportingDescriptor,
  Result,
} from 'sarif'
import type { DocumentFinding } from '../analysis.ts'
import type { Fix, Severity } from '../format/model.ts'
import type { CheckedFile } from './findings-json.ts'
import { Positions, type Region } from './positions.ts'

const SCHEMA = 'https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json'
const LEVEL = { error: 'error', warning: 'warning', info: 'note' } as const satisfies Record<
  Severity,
  Result.level
>

export interface SarifRule {
  readonly id: string
  readonly severity: Severity
  readonly summary: string
  readonly why: string
  /** The rule's page, Markdown. */
  readonly page: string
}

export interface SarifRun {
  readonly version: string
  readonly rules: readonly SarifRule[]
  /** What could not be read or checked, a sentence each. */
  readonly failures: readonly string[]
}

export function sarifLog(files: readonly CheckedFile[], { version, rules, failures }: SarifRun): Log {
  const indexOf = new Map(rules.map(({ id }, i) => [id, i]))
  return {
    $schema: SCHEMA,
    version: '2.1.0',
    runs: [
      {
        tool: { driver: { name: 'Braggline', version, rules: rules.map(descriptor) } },
        invocations: [
          {
            executionSuccessful: failures.length === 0,
            toolExecutionNotifications: failures.map(text => ({ level: 'error', message: { text } })),
          },
        ],
        columnKind: 'unicodeCodePoints',
        artifacts: files.map(({ file }) => ({ location: { uri: uriOf(file) } })),
        results: files.flatMap((file, index) => results(file, index, indexOf)),
      },
    ],
  }
}

const descriptor = ({ id, severity, summary, why, page }: SarifRule): ReportingDescriptor => ({
  id,
  shortDescription: { text: summary },
  fullDescription: { text: why },
  help: { text: why, markdown: page },
  defaultConfiguration: { level: LEVEL[severity] },
})

function results(
  { file, snapshot, findings }: CheckedFile,
  index: number,
  rules: ReadonlyMap<string, number>,
): Result[] {
  const positions = new Positions(snapshot)
  const place = (at: DocumentFinding['at']): Location => ({
    physicalLocation: { artifactLocation: { uri: uriOf(file), index }, region: region(positions.region(at)) },
  })
  return findings.map(({ rule, severity, message, at, related = [], fixes = [] }) => ({
    ruleId: rule,
    ...(rules.has(rule) ? { ruleIndex: rules.get(rule) } : {}),
    level: LEVEL[severity],
    message: { text: message },
    locations: [place(at)],
    ...(related.length > 0
      ? {
          relatedLocations: related.map(({ at, message }, i) => ({
            id: i,
            ...place(at),
            message: { text: message },
          })),
        }
      : {}),
    ...(fixes.length > 0 ? { fixes: fixes.map(fix => sarifFix(fix, file, index, positions)) } : {}),
  }))
}

const sarifFix = (
  { title, safe, edits }: Fix,
  file: string,
  index: number,
  positions: Positions,
): SarifFix => ({
  description: { text: title },
  artifactChanges: [
    {
      artifactLocation: { uri: uriOf(file), index },
      replacements: edits.map(({ at, text }) => ({
        deletedRegion: region(positions.region(at)),
        insertedContent: { text },
      })),
    },
  ],
  properties: { safe },
})

const region = ({ line, column, endLine, endColumn }: Region): SarifRegion => ({
  startLine: line,
  startColumn: column,
  endLine,
  endColumn,
})

/** A path as a relative URI reference; its separators stay. */
const uriOf = (file: string): string =>
  file === '-' ? 'stdin' : file.replaceAll('\\', '/').split('/').map(encodeURIComponent).join('/')
