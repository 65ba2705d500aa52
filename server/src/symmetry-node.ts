/** Starts the symmetry library under Node: its module lies beside the bundle, or in node_modules of a checkout. */
import { existsSync, readFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { setFlagsFromString } from 'node:v8'
import { loadSymmetryLibrary, symmetryLibraryLoaded } from './crystal/symmetry-library.ts'

const NAME = 'moyo_wasm_bg.wasm'

/** A bundle has its folder; what runs as an ES module in a checkout is started from inside that. */
const HERE = typeof __dirname === 'string' ? __dirname : process.cwd()

/**
 * A second call does nothing.
 * @throws Error naming the file when the module is nowhere (a broken installation).
 */
export function loadSymmetryFromDisk(): void {
  if (symmetryLibraryLoaded()) return
  const path = [join(HERE, NAME), ...inNodeModules(HERE)].find(existsSync)
  if (!path) throw new Error(`${NAME} is missing beside ${HERE}: the installation is not complete`)
  // Optimising the whole module takes longer than any search that a session makes: half the start of the command, and a
  // third of its memory. Unoptimised, a search takes up to four times as long, which is still milliseconds.
  setFlagsFromString('--liftoff-only')
  loadSymmetryLibrary(readFileSync(path))
}

/** The package's own copy in any node_modules from a folder upwards. */
function inNodeModules(folder: string): string[] {
  const paths: string[] = []
  for (let at = folder; ; at = dirname(at)) {
    paths.push(join(at, 'node_modules', '@spglib', 'moyo-wasm', NAME))
    if (dirname(at) === at) return paths
  }
}
