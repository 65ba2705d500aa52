/** Findings as SARIF 2.1.0 (OASIS standard, 2020), for code-scanning services and viewers. */
import type {
  ArtifactLocation,
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

/** What one file adds to a log. */
export interface SarifPart {
  readonly file: string
  readonly results: readonly Result[]
}

/** @param index ordinal of the file among the parts, from 0. */
export function sarifPart(
  { file, snapshot, findings }: CheckedFile,
  index: number,
  rules: readonly SarifRule[],
): SarifPart {
  const positions = new Positions(snapshot)
  const uri = uriOf(file)
  const place = (at: DocumentFinding['at']): Location => ({
    physicalLocation: { artifactLocation: { uri, index }, region: region(positions.region(at)) },
  })
  const results = findings.map(({ rule, severity, message, at, related = [], fixes = [] }): Result => {
    const ruleIndex = rules.findIndex(({ id }) => id === rule)
    return {
      ruleId: rule,
      ...(ruleIndex >= 0 ? { ruleIndex } : {}),
      level: LEVEL[severity],
      message: { text: message },
      locations: [place(at)],
      ...(related.length > 0
        ? {
            relatedLocations: related.map(({ at, message }, id) => ({
              id,
              ...place(at),
              message: { text: message },
            })),
          }
        : {}),
      ...(fixes.length > 0 ? { fixes: fixes.map(fix => sarifFix(fix, { uri, index }, positions)) } : {}),
    }
  })
  return { file, results }
}

/** The same part at another place among the parts: each of its locations names that place. */
export const sarifPartAt = (part: SarifPart, index: number): SarifPart =>
  JSON.parse(JSON.stringify(part), (_, value) =>
    value && typeof value === 'object' && 'uri' in value && 'index' in value ? { ...value, index } : value,
  )

export const sarifLog = (parts: readonly SarifPart[], { version, rules, failures }: SarifRun): Log => ({
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
      artifacts: parts.map(({ file }) => ({ location: { uri: uriOf(file) } })),
      results: parts.flatMap(({ results }) => results),
    },
  ],
})

const descriptor = ({ id, severity, summary, why, page }: SarifRule): ReportingDescriptor => ({
  id,
  shortDescription: { text: summary },
  fullDescription: { text: why },
  help: { text: why, markdown: page },
  defaultConfiguration: { level: LEVEL[severity] },
})

const sarifFix = (
  { title, safe, edits }: Fix,
  artifactLocation: ArtifactLocation,
  positions: Positions,
): SarifFix => ({
  description: { text: title },
  artifactChanges: [
    {
      artifactLocation,
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

/** A path as a URI: a relative one stays relative to where the command ran. */
function uriOf(file: string): string {
  if (file === '-') return 'stdin'
  const path = file.replaceAll('\\', '/').split('/').map(encodeURIComponent).join('/')
  if (path.startsWith('/')) return `file://${path}`
  const drive = /^([A-Za-z])%3A\//.exec(path)
  return drive ? `file:///${drive[1]}:${path.slice(drive[0].length - 1)}` : path
}
