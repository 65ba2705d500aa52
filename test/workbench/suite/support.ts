/// <reference types="mocha" />
import * as vscode from 'vscode'
import type { Api } from '../../../client/src/common.ts'
import type { CheckedResult } from '../../../server/src/protocol.ts'

export const EXTENSION = 'tarn-lane.braggline'
/** How long the editor may take to show what the server has answered, in ms. */
const PATIENCE = 30_000

export const file = (name: string): vscode.Uri =>
  vscode.Uri.joinPath(vscode.workspace.workspaceFolders![0].uri, name)

export async function open(name: string): Promise<vscode.TextEditor> {
  return vscode.window.showTextDocument(await vscode.workspace.openTextDocument(file(name)))
}

export async function api(): Promise<Api> {
  const extension = vscode.extensions.getExtension<Api>(EXTENSION)
  if (!extension) throw new Error(`${EXTENSION} is not installed`)
  return extension.activate()
}

/** What the server says of the text as it stands. */
export async function checked(document: vscode.TextDocument): Promise<CheckedResult> {
  const result = await (await api()).checked(document.uri)
  if (!result) throw new Error(`the server does not know version ${document.version} of ${document.uri}`)
  if (result.version < document.version) throw new Error(`the server is behind: version ${result.version}`)
  return result
}

/** Resolves with the first value that is not undefined: looks now, then after each event. */
async function until<T>(
  look: () => T | undefined,
  event: vscode.Event<unknown>,
  failure: () => string,
): Promise<T> {
  const first = look()
  if (first !== undefined) return first
  return new Promise((found, failed) => {
    const end = () => {
      clearTimeout(timer)
      subscription.dispose()
    }
    const timer = setTimeout(() => {
      end()
      failed(new Error(failure()))
    }, PATIENCE)
    const subscription = event(() => {
      const value = look()
      if (value === undefined) return
      end()
      found(value)
    })
  })
}

export const ruleOf = ({ code }: vscode.Diagnostic): string | undefined =>
  typeof code === 'object' ? String(code.value) : code?.toString()

/** The findings that the editor shows of one rule, once there are as many as expected. */
export function shown(uri: vscode.Uri, rule: string, count: number): Promise<vscode.Diagnostic[]> {
  const look = () => vscode.languages.getDiagnostics(uri).filter(each => ruleOf(each) === rule)
  return until(
    () => (look().length === count ? look() : undefined),
    vscode.languages.onDidChangeDiagnostics,
    () => `not ${count} of ${rule} but ${JSON.stringify(vscode.languages.getDiagnostics(uri))}`,
  )
}

/** Resolves when the editor shows exactly what the server found in this version of the text. */
export async function settled(document: vscode.TextDocument): Promise<vscode.Diagnostic[]> {
  const { findings } = await checked(document)
  const look = () => vscode.languages.getDiagnostics(document.uri)
  return until(
    () => (look().length === findings ? look() : undefined),
    vscode.languages.onDidChangeDiagnostics,
    () => `not ${findings} findings but ${JSON.stringify(look())}`,
  )
}

/** Replaces the first place where `from` stands. */
export async function replace(editor: vscode.TextEditor, from: string, to: string): Promise<void> {
  const { document } = editor
  const offset = document.getText().indexOf(from)
  if (offset < 0) throw new Error(`"${from}" is not in the text`)
  const range = new vscode.Range(document.positionAt(offset), document.positionAt(offset + from.length))
  await editor.edit(edit => edit.replace(range, to))
}

/** Puts everything back as it is on disk. */
export async function closeAll(): Promise<void> {
  while (vscode.window.activeTextEditor)
    await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor')
}

export async function set(section: string, name: string, value: unknown): Promise<void> {
  await vscode.workspace.getConfiguration(section).update(name, value, vscode.ConfigurationTarget.Workspace)
}

/** Looks until it is so, for what no event tells of. */
export async function soon(isSo: () => boolean | undefined | Promise<boolean>): Promise<void> {
  for (const end = Date.now() + PATIENCE; Date.now() < end; ) {
    if (await isSo()) return
    await new Promise(done => setTimeout(done, 25))
  }
  throw new Error(`never so: ${isSo}`)
}
