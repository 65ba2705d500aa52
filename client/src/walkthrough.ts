/** The walkthrough's sample, which needs no folder, and the real events that tick its steps off. */
import {
  commands,
  type ExtensionContext,
  languages,
  TabInputWebview,
  type TextDocument,
  ViewColumn,
  window,
  workspace,
} from 'vscode'
import { REPORT_NAME } from './report.ts'
import { SAMPLE } from './sample.ts'
import type { Server } from './server.ts'

/** What a step may go on with once the sample is open. */
const FURTHER: Readonly<Record<string, string>> = {
  zone: 'braggline.openZoneView',
  report: 'braggline.openReport',
}

export function registerWalkthrough(
  context: ExtensionContext,
  { server }: { readonly server: Server },
): void {
  const steps = new Set<string>()
  const done = (step: string) => {
    if (steps.has(step)) return
    steps.add(step)
    void commands.executeCommand('setContext', `braggline.done.${step}`, true)
  }
  const faulty = new Set<string>()
  let sample: TextDocument | undefined
  context.subscriptions.push(
    commands.registerCommand('braggline.openSample', async (then?: unknown) => {
      if (!sample || sample.isClosed) sample = await openSample()
      await window.showTextDocument(sample, { viewColumn: ViewColumn.One, preview: false })
      const command = typeof then === 'string' ? FURTHER[then] : undefined
      if (command) await commands.executeCommand(command)
    }),
    server.onChecked(({ uri, errors, warnings, pending }) => {
      if (errors + warnings > 0) faulty.add(uri)
      else if (!pending && faulty.has(uri)) done('mended')
    }),
    window.tabGroups.onDidChangeTabs(({ opened }) => {
      for (const { input, label } of opened) {
        if (!(input instanceof TabInputWebview)) continue
        if (input.viewType.endsWith('braggline.zoneView')) done('zone')
        if (input.viewType.endsWith('markdown.preview') && label.endsWith(REPORT_NAME)) done('report')
      }
    }),
  )
}

async function openSample(): Promise<TextDocument> {
  const document = await workspace.openTextDocument({ language: 'braggline', content: SAMPLE })
  return document.languageId === 'braggline'
    ? document
    : languages.setTextDocumentLanguage(document, 'braggline')
}
