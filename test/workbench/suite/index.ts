/**
 * The entry that the editor runs, in the Node host and in the browser's worker alike. The exit code alone proves nothing
 * (a host that dies can end as 0), so the counts go to a file beside the workspace and the runner looks at them.
 */
import Mocha from 'mocha'
import * as vscode from 'vscode'

declare const SUITES: string[]

export async function run(): Promise<void> {
  const mocha = new Mocha({ ui: 'bdd', timeout: 90_000, color: false, reporter: 'spec' })
  mocha.suite.emit('pre-require', globalThis as never, '', mocha)
  for (const suite of SUITES) await suites[suite]()
  const stats = await new Promise<object>(done => {
    const runner = mocha.run(failures => done({ ...runner.stats, failures }))
  })
  const folder = vscode.workspace.workspaceFolders![0].uri
  const result = new TextEncoder().encode(JSON.stringify(stats))
  await vscode.workspace.fs.writeFile(vscode.Uri.joinPath(folder, '..', 'result.json'), result)
}

const suites: Record<string, () => Promise<unknown>> = {
  findings: () => import('./findings.test.ts'),
  files: () => import('./files.test.ts'),
  cif: () => import('./cif.test.ts'),
  colours: () => import('./colours.test.ts'),
  commands: () => import('./commands.test.ts'),
  settings: () => import('./settings.test.ts'),
  process: () => import('./process.test.ts'),
  pictures: () => import('./pictures.test.ts'),
  writing: () => import('./writing.test.ts'),
  'zone-view': () => import('./zone-view.test.ts'),
  'zone-tab': () => import('./zone-tab.test.ts'),
  'report-picture': () => import('./report-picture.test.ts'),
  report: () => import('./report.test.ts'),
  'workspace-check': () => import('./workspace-check.test.ts'),
  paste: () => import('./paste.test.ts'),
  walkthrough: () => import('./walkthrough.test.ts'),
  craft: () => import('./craft.test.ts'),
  forms: () => import('./forms.test.ts'),
  asleep: () => import('./asleep.test.ts'),
}
