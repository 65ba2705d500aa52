/** CIFs in and out of an editor. */
import type { Snapshot } from '../analysis.ts'
import { importCif } from '../exchange/cif/import.ts'
import { exportCif } from '../exchange/cif/write.ts'
import type { ExportCifParams, ExportCifResult, ImportCifParams, ImportCifResult } from '../protocol.ts'

/** The symmetry library must have been started. */
export function importCifAnswer({ text, source }: ImportCifParams): ImportCifResult {
  const { text: lattices, blocks, faults } = importCif(text, { source })
  const told = (wanted: 'loss' | 'note') =>
    blocks.flatMap(({ name, remarks }) =>
      remarks
        .filter(({ level }) => level === wanted)
        .map(
          ({ message, place }) =>
            `${place ? `line ${place.line}: ` : ''}${blocks.length > 1 ? `${name}: ` : ''}${message}`,
        ),
    )
  return {
    text: lattices ?? null,
    name: source.replace(/\.cif$/i, ''),
    losses: [
      ...faults.map(({ message, line, column }) => `line ${line}, column ${column}: ${message}`),
      ...told('loss'),
    ],
    notes: told('note'),
  }
}

export function exportCifAnswer(
  snapshot: Snapshot,
  { position, source }: ExportCifParams,
  version: string,
): ExportCifResult {
  const { version: of } = snapshot
  const picked = snapshot.documentAt(snapshot.offsetOf(position))
  if (!picked?.crystal.lattice)
    return { version: of, text: null, refusal: 'there is no lattice that could be built', notes: [] }
  const written = exportCif(picked.crystal, { source, version })
  return 'refusal' in written
    ? { version: of, text: null, refusal: written.refusal, notes: [] }
    : { version: of, text: written.text, notes: written.notes }
}
