/** The one pipeline as the command line drives it: a text is asked again until no search for symmetry is left running. */
import { type DocumentAnalysis, Snapshot } from '../analysis.ts'
import { count } from '../meaning/wording.ts'
import { type SymmetryService, Workshop } from '../meaning/workshop.ts'
import { Refusal } from './io.ts'

/** A service that can say when it has nothing left to do. */
export interface Symmetries extends SymmetryService {
  idle(): Promise<void>
}

export class Engine {
  readonly #workshop: Workshop

  constructor(private readonly symmetries: Symmetries) {
    this.#workshop = new Workshop(symmetries)
  }

  /** A snapshot with all its findings computed. */
  async check(text: string): Promise<Snapshot> {
    let snapshot = this.#look(text)
    // Each round ends the searches of one document at least.
    for (let rounds = snapshot.documents.length; snapshot.pending && rounds > 0; rounds--) {
      await this.symmetries.idle()
      snapshot = this.#look(text)
    }
    return snapshot
  }

  #look(text: string): Snapshot {
    const snapshot = new Snapshot(text, this.#workshop)
    void snapshot.findings
    return snapshot
  }
}

/** The documents of a file, or the one that was picked. */
export function documentsOf(
  snapshot: Snapshot,
  name: string,
  picked: number | undefined,
): readonly DocumentAnalysis[] {
  const { documents } = snapshot
  if (picked === undefined) return documents
  const document = documents[picked - 1]
  if (!document)
    throw new Refusal(`${name} holds ${count(documents.length, 'crystal')}: there is no document ${picked}`)
  return [document]
}

/**
 * Where the symmetry of a crystal could not be found: rules that need it were silent. Not told where a finding of the
 * document says what is wrong with it.
 */
export const withoutSymmetry = (snapshot: Snapshot, name: string, picked: number | undefined): string[] =>
  snapshot.documents.flatMap(({ document: { number }, crystal }) => {
    if (!crystal.lattice || (picked !== undefined && number !== picked)) return []
    const outcome = crystal.symmetryOutcome
    if (outcome.state === 'found') return []
    if (snapshot.findings.some(({ document, severity }) => document === number && severity === 'error'))
      return []
    const reason = outcome.state === 'failed' ? outcome.reason : 'the search did not end'
    return [`${name}, document ${number}: nothing that needs the symmetry was checked: ${reason}`]
  })
