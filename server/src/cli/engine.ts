/** The one pipeline as the command line drives it: a text is asked again until no search for symmetry is left running. */
import { type DocumentAnalysis, Snapshot } from '../analysis.ts'
import { count } from '../meaning/wording.ts'
import { type SymmetryService, Workshop } from '../meaning/workshop.ts'
import { type Io, Refusal } from './io.ts'
import { Progress } from './progress.ts'

/** A service that can say when it has nothing left to do. */
export interface Symmetries extends SymmetryService {
  idle(): Promise<void>
}

export class Engine {
  readonly #workshop: Workshop
  readonly progress: Progress

  constructor(
    private readonly symmetries: Symmetries,
    io: Io,
  ) {
    this.#workshop = new Workshop(symmetries)
    this.progress = new Progress(io)
  }

  /** A snapshot with all its findings computed. */
  async check(text: string): Promise<Snapshot> {
    let snapshot = this.#look(text)
    // Each round ends the searches of one document at least.
    for (let rounds = snapshot.documents.length; snapshot.pending && rounds > 0; rounds--) {
      await this.progress.during('searching for the symmetry of a large cell…', this.symmetries.idle())
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
