/** Quick fixes, "fix all of this kind", "fix all", and the comment that silences a rule on a line. */
import {
  type CodeAction,
  CodeActionKind,
  type Diagnostic,
  type Range,
  type WorkspaceEdit,
} from 'vscode-languageserver-types'
import type { DocumentFinding, Snapshot } from '../analysis.ts'
import { chooseSafeFixes } from '../exchange/safe-fixes.ts'
import { insertAllowance } from '../format/edits.ts'
import type { TextEdit } from '../format/model.ts'
import { rangeOf } from './diagnostics.ts'
import { type EditAbilities, workspaceEdit } from './workspace-edit.ts'

export const FIX_ALL = `${CodeActionKind.SourceFixAll}.braggline`

export interface FixRequest {
  readonly uri: string
  readonly version: number | null
  readonly range: Range
  /** What the editor shows at the range; the actions are tied to them. */
  readonly shown: readonly Diagnostic[]
  /** Kinds asked for; all where absent. */
  readonly only?: readonly string[]
  readonly abilities: EditAbilities
}

export function codeActions(snapshot: Snapshot, request: FixRequest): CodeAction[] {
  const wants = (kind: string) =>
    !request.only || request.only.some(asked => kind === asked || kind.startsWith(`${asked}.`))
  const actions: CodeAction[] = []
  if (wants(CodeActionKind.QuickFix)) {
    for (const finding of findingsIn(snapshot, request.range))
      actions.push(...actionsFor(snapshot, request, finding))
  }
  if (wants(FIX_ALL)) {
    const edits = safeEdits(snapshot.findings)
    if (edits.length > 0)
      actions.push({
        title: 'Fix all that is safe to fix',
        kind: FIX_ALL,
        edit: toWorkspaceEdit(snapshot, request, edits),
      })
  }
  return actions
}

function findingsIn(snapshot: Snapshot, range: Range): DocumentFinding[] {
  const start = snapshot.offsetOf(range.start)
  const end = snapshot.offsetOf(range.end)
  return snapshot.findings.filter(({ at }) => at[0] <= end && at[1] >= start)
}

function actionsFor(snapshot: Snapshot, request: FixRequest, finding: DocumentFinding): CodeAction[] {
  const diagnostics = request.shown.filter(
    shown => shown.code === finding.rule && snapshot.offsetOf(shown.range.start) === finding.at[0],
  )
  const action = (title: string, edits: readonly TextEdit[], isPreferred = false): CodeAction => ({
    title,
    kind: CodeActionKind.QuickFix,
    diagnostics,
    ...(isPreferred ? { isPreferred } : {}),
    edit: toWorkspaceEdit(snapshot, request, edits),
  })
  const fixes = finding.fixes ?? []
  const safe = fixes.filter(fix => fix.safe)
  const actions = fixes.map(fix => action(fix.title, fix.edits, safe.length === 1 && fix.safe))
  const alike = snapshot.findings.filter(
    ({ rule, fixes = [] }) => rule === finding.rule && fixes.some(fix => fix.safe),
  )
  if (safe.length > 0 && alike.length > 1)
    actions.push(action(`Fix all ${alike.length} findings of ${finding.rule}`, safeEdits(alike)))
  if (finding.severity !== 'error')
    actions.push(
      action(
        `Allow ${finding.rule} on this line`,
        insertAllowance(snapshot.text, finding.at[0], finding.rule),
      ),
    )
  return actions
}

const safeEdits = (findings: readonly DocumentFinding[]): TextEdit[] =>
  chooseSafeFixes(findings).flatMap(({ fix }) => fix.edits)

function toWorkspaceEdit(snapshot: Snapshot, request: FixRequest, edits: readonly TextEdit[]): WorkspaceEdit {
  const changes = edits.map(edit => ({ range: rangeOf(snapshot, edit.at), newText: edit.text }))
  return workspaceEdit(request, changes, request.abilities)
}
