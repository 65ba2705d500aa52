/** Wires what an editor writes into a text and beside it: formatting, hints, lenses. */
import type { Connection, ServerCapabilities } from 'vscode-languageserver'
import {
  FIRST_TRIGGER,
  type FormattingOptions,
  formatting,
  formattingOnType,
  MORE_TRIGGERS,
} from './language/formatting.ts'
import type { EditorSettings } from './language/settings.ts'
import type { About } from './server-navigation.ts'

export interface EditingSurroundings {
  readonly connection: Connection
  readonly about: About
  readonly settings: () => EditorSettings
}

export const EDITING: ServerCapabilities = {
  documentFormattingProvider: true,
  documentRangeFormattingProvider: true,
  documentOnTypeFormattingProvider: {
    firstTriggerCharacter: FIRST_TRIGGER,
    moreTriggerCharacter: MORE_TRIGGERS,
  },
}

export function serveEditing({ connection, about, settings }: EditingSurroundings): void {
  const chosen = ({ tabSize }: { tabSize: number }): FormattingOptions => {
    const { alignColumns, enDash } = settings().format
    return { tabSize, columns: alignColumns, enDash }
  }
  connection.onDocumentFormatting(
    about('formatting', [], (snapshot, { options }) => formatting(snapshot, chosen(options))),
  )
  connection.onDocumentRangeFormatting(
    about('formatting of lines', [], (snapshot, { options, range }) =>
      formatting(snapshot, chosen(options), range),
    ),
  )
  connection.onDocumentOnTypeFormatting(
    about('formatting on type', [], (snapshot, { options, position, ch }) =>
      formattingOnType(snapshot, position, ch, chosen(options)),
    ),
  )
}
