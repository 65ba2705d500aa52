// npm test : builds, runs every test, packages, and runs the package inside a real VS Code. Its last line counts all of them.
import { spawnSync } from 'node:child_process'
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = fileURLToPath(new URL('..', import.meta.url))
const artifacts = join(root, 'test-artifacts')
const units = join(artifacts, 'units.json')
const workbench = join(artifacts, 'workbench.json')
mkdirSync(artifacts, { recursive: true })
for (const file of [units, workbench]) rmSync(file, { force: true })

const counts = { passed: 0, failed: 0 }

// The package comes first: it is built on the way, and tests of the command and of the server run what was built.
step('npm', 'run', 'package', '--silent')
step('npx', 'vitest', 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${units}`)
count(units, ({ numPassedTests, numFailedTests, success }) => [
  numPassedTests,
  numFailedTests || (success ? 0 : 1),
])
step('npm', 'run', 'test:workbench', '--silent')
count(workbench, ({ passed, failed }) => [passed, failed])

console.log(`${counts.passed} passed, ${counts.failed} failed`)
process.exit(counts.failed === 0 && counts.passed > 0 ? 0 : 1)

/** A step that fails without a test to show for it counts as one. */
function step(...command) {
  const [name, ...args] = command
  const { status } = spawnSync(name, args, {
    cwd: root,
    stdio: 'inherit',
    shell: process.platform === 'win32',
  })
  if (status === 0) return
  console.error(`failed: ${command.join(' ')}`)
  if (command.includes('package')) process.exit(1)
}

function count(file, read) {
  const [passed, failed] = existsSync(file) ? read(JSON.parse(readFileSync(file, 'utf8'))) : [0, 1]
  counts.passed += passed
  counts.failed += failed
}
