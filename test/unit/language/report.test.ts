import { expect, test } from 'vitest'
import { fileName } from '../../../server/src/language/report.ts'

test.each([
  ['file:///work/tin%20selenide.lattice.yaml', 'tin selenide.lattice.yaml'],
  ['vscode-remote://host:99/work/a.lattice.yaml?x=1', 'a.lattice.yaml'],
  // As editors call a text that was never saved.
  ['untitled:Untitled-1', 'Untitled-1'],
])('%s is called %s', (uri, name) => expect(fileName(uri)).toBe(name))
