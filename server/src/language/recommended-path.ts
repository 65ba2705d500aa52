import { type Position, TextEdit } from 'vscode-languageserver-types'
import type { Snapshot } from '../analysis.ts'
import { insertKeys, replaceValue } from '../format/edits.ts'
import { recommendedPath } from '../meaning/recommended.ts'
import { rangeOf } from './diagnostics.ts'

/** The edits that write the label book's own path into the document at the position; null where there is no such path. */
export function recommendedPathEdit(snapshot: Snapshot, position: Position): TextEdit[] | null {
  const analysis = snapshot.documentAt(snapshot.offsetOf(position))
  const path = analysis && recommendedPath(analysis.crystal)
  if (!analysis || !path) return null
  const { document } = analysis
  const edits = document.path
    ? [replaceValue(snapshot.text, document.path, path.text)]
    : insertKeys(snapshot.text, document, [['path', path.text]])
  return edits.map(edit => TextEdit.replace(rangeOf(snapshot, edit.at), edit.text))
}
