/** Edits of one text in the form that the client takes. */
import {
  type AnnotatedTextEdit,
  OptionalVersionedTextDocumentIdentifier,
  type TextEdit,
  type WorkspaceEdit,
} from 'vscode-languageserver-types'

/** What the client can do with edits of a text. */
export interface EditAbilities {
  /** It takes edits of one version of a text, and refuses them for another. */
  readonly versions: boolean
  /** It shows changes that carry a note, and asks for those that want a look. */
  readonly annotations: boolean
}

export interface EditedText {
  readonly uri: string
  readonly version: number | null
}

/** A note that is shown with the edits, which the client asks about before it makes them. */
export interface Note {
  readonly label: string
  readonly description: string
}

const NOTE = 'change'

export function workspaceEdit(
  { uri, version }: EditedText,
  edits: readonly TextEdit[],
  { versions, annotations }: EditAbilities,
  note?: Note,
): WorkspaceEdit {
  if (!versions) return { changes: { [uri]: [...edits] } }
  const textDocument = OptionalVersionedTextDocumentIdentifier.create(uri, version)
  if (!annotations || !note) return { documentChanges: [{ textDocument, edits: [...edits] }] }
  const noted = edits.map((edit): AnnotatedTextEdit => ({ ...edit, annotationId: NOTE }))
  return {
    documentChanges: [{ textDocument, edits: noted }],
    changeAnnotations: { [NOTE]: { ...note, needsConfirmation: true } },
  }
}
