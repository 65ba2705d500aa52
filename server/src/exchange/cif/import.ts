/** A CIF as a lattice file: one document for each data block that describes a crystal. */
import { latticeFileText } from './lattice-file.ts'
import { hasCell, listed, readCrystal, type Remark } from './read.ts'
import { basisOf } from './sites.ts'
import { type CifFault, parseCif, shown } from './syntax.ts'

export interface ImportedBlock {
  readonly name: string
  readonly remarks: readonly Remark[]
}

export interface CifImport {
  /** The lattice file; undefined where nothing could be made. */
  readonly text?: string
  readonly blocks: readonly ImportedBlock[]
  /** What kept a block, or the file, from being read. */
  readonly faults: readonly CifFault[]
}

export interface ImportOptions {
  /** What the CIF is called in the comments of the lattice file. */
  readonly source: string
  /** Only this data block. */
  readonly block?: string
}

/** The symmetry library must have been started. Never throws for what a file can hold. */
export function importCif(text: string, { source, block }: ImportOptions): CifImport {
  const file = parseCif(text)
  const faults: CifFault[] = [...file.faults]
  const named = block === undefined ? file.blocks : file.blocks.filter(each => sameName(each.name, block))
  if (named.length === 0 && faults.length === 0)
    faults.push({
      message: missing(
        file.blocks.map(({ name }) => name),
        block,
      ),
      line: 1,
      column: 1,
    })
  const crystals = named.filter(each => block !== undefined || hasCell(each) || each.faults.length > 0)
  if (named.length > 0 && crystals.length === 0)
    faults.push({
      message: 'no data block states a cell (_cell_length_a …)',
      line: named[0].line,
      column: named[0].column,
    })
  const blocks: ImportedBlock[] = []
  const texts: string[] = []
  for (const each of crystals) {
    const crystal = readCrystal(each)
    if ('failure' in crystal) {
      const where = named.length > 1 ? `data block ${shown(each.name)}: ` : ''
      faults.push({ message: where + crystal.failure, line: crystal.line, column: crystal.column })
      continue
    }
    const basis = basisOf(crystal.sites, crystal.operations, crystal.rows)
    if (!basis) {
      faults.push({
        message: `data block ${shown(each.name)}: the cell holds too many atoms`,
        line: each.line,
        column: each.column,
      })
      continue
    }
    const remarks = [
      ...crystal.remarks,
      ...basis.remarks,
      ...contentRemarks(crystal.contents, basis.contents),
    ]
    blocks.push({ name: each.name, remarks })
    texts.push(latticeFileText(crystal, basis, source, remarks))
  }
  return { text: texts.length > 0 ? texts.join('---\n') : undefined, blocks, faults }
}

const sameName = (p: string, q: string): boolean => p.toLowerCase() === q.replace(/^data_/i, '').toLowerCase()

const missing = (names: readonly string[], block: string | undefined): string =>
  names.length === 0
    ? 'no data block (data_…): this is no CIF'
    : `no data block is named ${shown(block ?? '')}; there are ${listed(names)}`

/** Numbers of atoms in a formula are written with two or three digits. */
const CONTENT_MISS = 0.02

/** Formula and Z against the atoms that were listed: a CIF may leave out hydrogens or solvent. */
function contentRemarks(
  stated: ReadonlyMap<string, number> | undefined,
  found: ReadonlyMap<string, number>,
): Remark[] {
  if (!stated || found.size === 0) return []
  const elements = [...new Set([...stated.keys(), ...found.keys()])]
  const differing = elements.filter(element => {
    const [p, q] = [stated.get(element) ?? 0, found.get(element) ?? 0]
    return Math.abs(p - q) > CONTENT_MISS * Math.max(p, q)
  })
  if (differing.length === 0) return []
  const words = differing.map(
    element => `${element} ${short(found.get(element) ?? 0)} and not ${short(stated.get(element) ?? 0)}`,
  )
  return [
    {
      level: 'loss',
      message: `the listed atoms are not what formula and Z say of the cell: ${words.join(', ')}`,
    },
  ]
}

const short = (x: number): string => String(Number(x.toFixed(2)))
