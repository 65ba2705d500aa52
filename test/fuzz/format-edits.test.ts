/** Every edit gives a text that reads as intended: what was meant changes, all else and all comments stay. */
import fc from 'fast-check'
import { expect, test } from 'vitest'
import { decode } from '../../server/src/format/decode.ts'
import {
  appendToPath,
  applyEdits,
  breakSegment,
  insertAllowance,
  insertKeys,
  insertLabels,
  type NewKey,
  removeEntry,
  removeItems,
  removeSegment,
  replaceValue,
  replaceVector,
  scalarText,
} from '../../server/src/format/edits.ts'
import type { DecodedFile, LatticeDocument, TextEdit, VectorValue } from '../../server/src/format/model.ts'
import { readYaml } from '../../server/src/format/yaml.ts'
import { styled } from './format-styles.ts'

const RUNS = Number(process.env.FUZZ_RUNS ?? 250)

const numbers = (vector: VectorValue | undefined) => vector?.items.map(item => item?.value)

/** What a document says, without any places. */
function said(document: LatticeDocument) {
  const {
    title,
    unit,
    tolerance,
    lattice,
    atoms,
    frames,
    points,
    sampling,
    meshes,
    supercell,
    checks,
    labels,
  } = document
  return {
    title: title?.value,
    unit,
    labels,
    tolerance: tolerance?.value,
    lattice: lattice && {
      bravais: lattice.bravais?.value,
      centring: lattice.centring?.value,
      vectors: lattice.vectors?.rows.map(numbers),
      parameters: Object.fromEntries(
        Object.entries(lattice.parameters).map(([name, number]) => [name, number?.value]),
      ),
    },
    atoms: atoms?.items.map(atom => [atom.element?.value, atom.name?.value, numbers(atom.position)]),
    frames,
    points:
      points &&
      Object.fromEntries(
        points.items.map(({ label, coordinates, between }) => [
          label,
          numbers(coordinates) ?? [between?.ends.map(end => end.label), between?.fraction?.value],
        ]),
      ),
    path: pathOf(document),
    sampling: sampling && [sampling.spacing?.value, sampling.steps?.value, sampling.total?.value],
    meshes: meshes.map(mesh => [
      mesh.name,
      numbers(mesh.divisions),
      mesh.spacing?.value,
      numbers(mesh.shift),
    ]),
    supercell: supercell && [supercell.diagonal, supercell.rows.map(numbers)],
    checks: Object.fromEntries([...checks].map(([rule, { value }]) => [rule, value])),
  }
}
type Said = ReturnType<typeof said>

const pathOf = ({ path }: LatticeDocument): string[] | undefined =>
  path?.pieces.map(({ labels, segments }) =>
    labels
      .map(
        ({ label }, i) =>
          `${i > 0 ? (segments[i - 1].steps ? `(${segments[i - 1].steps!.value})` : '–') : ''}${label}`,
      )
      .join(''),
  )

function read(text: string): LatticeDocument {
  const file: DecodedFile = decode(text)
  expect(file.documents.length, text).toBe(1)
  expect(
    [...file.problems, ...file.documents[0].problems].map(({ message }) => message),
    text,
  ).toEqual([])
  return file.documents[0]
}

const commentsOf = (text: string): string[] =>
  readYaml(text).comments.map(({ text: comment }) => comment.trim())

/** Apply edits and read again; `lost` comments may go. */
function edited(text: string, edits: readonly TextEdit[], change: (said: Said) => Said, lost = 0): string {
  const before = said(read(text))
  const after = applyEdits(text, edits)
  expect(said(read(after)), `${text}\n⇒\n${after}`).toEqual(change(before))
  const gone = commentsOf(text).length - commentsOf(after).length
  expect(gone, `${text}\n⇒\n${after}`).toBeLessThanOrEqual(lost)
  return after
}

/** Run a property over styled files that have what it needs, often enough. */
function overFiles(
  property: (text: string, document: LatticeDocument, pick: <T>(items: readonly T[]) => T) => void,
): void {
  let ran = 0
  fc.assert(
    fc.property(styled, fc.nat(), (text, n) => {
      const document = read(text)
      const pick = <T>(items: readonly T[]): T => {
        if (items.length === 0) throw NOTHING
        return items[n % items.length]
      }
      try {
        property(text, document, pick)
        ran++
      } catch (error) {
        if (error !== NOTHING) throw error
      }
    }),
    { numRuns: RUNS },
  )
  expect(ran).toBeGreaterThan(RUNS / 5)
}
const NOTHING = Symbol('The file has nothing to try this on.')

const NEW_KEYS: readonly (readonly [NewKey, (said: Said) => Said])[] = [
  [['title', '"A: b"'], file => ({ ...file, title: 'A: b' })],
  [['unit', 'nm'], file => ({ ...file, unit: 'nm' })],
  [['tolerance', '1e-3'], file => ({ ...file, tolerance: 0.001 })],
  [['labels', 'hinuma-2017'], file => ({ ...file, labels: 'hinuma-2017' })],
  [['points', '{Q: [0, 0, 1/2]}'], file => ({ ...file, points: { Q: [0, 0, 0.5] } })],
  [['path', 'Γ – X | Γ – L'], file => ({ ...file, path: ['Γ–X', 'Γ–L'] })],
  [['sampling', '{steps: 4}'], file => ({ ...file, sampling: [undefined, 4, undefined] })],
  [['checks', '{path-misses: off}'], file => ({ ...file, checks: { 'path-misses': 'off' } })],
]

test('a key is inserted into the document', () => {
  overFiles((text, document, pick) => {
    const [key, change] = pick(NEW_KEYS.filter(([[name]]) => !document.keys.has(name)))
    edited(text, insertKeys(text, document, [key]), change)
  })
})

test('several keys are inserted into the document at once', () => {
  overFiles((text, document) => {
    const fitting = NEW_KEYS.filter(([[name]]) => !document.keys.has(name))
    const edits = insertKeys(text, document, fitting.map(([key]) => key).reverse())
    edited(text, edits, file => fitting.reduce((said, [, change]) => change(said), file))
  })
})

test('a key is inserted into the lattice', () => {
  overFiles((text, document) => {
    const lattice = document.lattice!
    const key = lattice.keys.has('vectors') ? (['centring', 'F'] as const) : (['b', 'a'] as const)
    edited(text, insertKeys(text, lattice, [key]), file => {
      const { centring, parameters, ...rest } = file.lattice!
      if (key[0] === 'centring') return { ...file, lattice: { ...rest, parameters, centring: 'F' } }
      return { ...file, lattice: { ...rest, centring, parameters: { ...parameters, b: parameters.a } } }
    })
  })
})

test('points are inserted', () => {
  overFiles((text, document, pick) => {
    const points = pick(document.points ? [document.points] : [])
    edited(
      text,
      insertKeys(text, points, [
        ['N', '[0, 1/2, 0]'],
        ['Z_2', '[0, 0, 1/2]'],
      ]),
      file => ({
        ...file,
        points: { ...file.points, N: [0, 0.5, 0], Z2: [0, 0, 0.5] },
      }),
    )
  })
})

test('a key is removed, with at most the comments of its own', () => {
  overFiles((text, document, pick) => {
    const names = [...document.keys.keys()].filter(name => name !== 'lattice')
    const name = pick(names)
    const entry = document.keys.get(name)!
    const own = commentsOf(text.slice(...entry.item)).length
    const bare = said(decode('lattice: {bravais: cP, a: 1}\n').documents[0]) as unknown as Record<
      string,
      unknown
    >
    const field = name === 'mesh' ? 'meshes' : name
    edited(text, [removeEntry(text, entry)], file => ({ ...file, [field]: bare[field] }), own)
  })
})

test('two keys are removed and one is inserted by edits that can be applied together', () => {
  overFiles((text, document, pick) => {
    const names = [...document.keys.keys()].filter(name => name !== 'lattice')
    const first = pick(names)
    const second = pick(names.filter(name => name !== first))
    const [key] = pick(NEW_KEYS.filter(([[name]]) => !document.keys.has(name)))
    const removals = [first, second].map(name => removeEntry(text, document.keys.get(name)!))
    // A key at the very end of a mapping in braces cannot follow one that goes.
    const added = insertKeys(text, document, [key])
    if (text[document.contents[0]] === '{' && added[0].text.startsWith(',')) return
    const after = read(applyEdits(text, [...added, ...removals]))
    expect(after.keys.has(first) || after.keys.has(second)).toBe(false)
    expect(after.keys.has(key[0])).toBe(true)
    expect(after.keys.size).toBe(document.keys.size - 1)
  })
})

test('a value is replaced', () => {
  overFiles((text, document, pick) => {
    const path = pick(document.path ? [document.path] : [])
    const own = commentsOf(text.slice(path.key[1], path.at[1])).length
    edited(text, [replaceValue(text, path, scalarText('Γ – Q'))], file => ({ ...file, path: ['Γ–Q'] }), own)
  })
})

test('atoms and points are removed', () => {
  overFiles((text, document, pick) => {
    const atoms = pick(document.atoms ? [document.atoms] : [])
    const doomed = atoms.items.filter((_, i) => i !== 1)
    const own = doomed.reduce((count, { item }) => count + commentsOf(text.slice(...item)).length, 0)
    edited(text, removeItems(atoms, doomed), file => ({ ...file, atoms: [file.atoms![1]] }), own)
    const all = read(applyEdits(text, removeItems(atoms, atoms.items)))
    expect(all.keys.has('atoms')).toBe(false)
  })
  overFiles((text, document, pick) => {
    const points = pick(document.points ? [document.points] : [])
    const [first, ...others] = points.items
    const own = commentsOf(text.slice(...first.item)).length
    edited(
      text,
      removeItems(points, [first]),
      ({ points, ...file }) => {
        const { Q: _removed, ...rest } = points!
        return { ...file, points: rest }
      },
      own,
    )
    expect(others.length).toBe(2)
  })
})

test('numbers of a vector are replaced in its own layout', () => {
  overFiles((text, document, pick) => {
    const atoms = pick(document.atoms ? [document.atoms] : [])
    edited(text, replaceVector(text, atoms.items[1].position!, [undefined, '2/3', 'a']), file => {
      const changed = [...file.atoms!]
      changed[1] = [changed[1][0], changed[1][1], [0.25, 2 / 3, document.lattice!.parameters.a!.value]]
      return { ...file, atoms: changed }
    })
  })
})

test('pieces are appended to a path', () => {
  overFiles((text, document, pick) => {
    const path = pick(document.path ? [document.path] : [])
    edited(
      text,
      appendToPath(text, path, [
        ['Γ', 'M'],
        ['M', 'K', 'X1'],
      ]),
      file => ({ ...file, path: [...file.path!, 'Γ–M', 'M–K–X1'] }),
    )
  })
})

/** Where a segment stands, by piece and place. */
const segmentsOf = ({ path }: LatticeDocument) =>
  (path?.pieces ?? []).flatMap((piece, p) => piece.segments.map((segment, s) => ({ piece, p, s, segment })))

test('a segment is broken, named on the way, or removed', () => {
  overFiles((text, document, pick) => {
    const { piece, p, s, segment } = pick(segmentsOf(document))
    const labels = piece.labels.map(({ label }) => label)
    const others = (replaced: readonly string[][]) => {
      const pieces = document.path!.pieces.map(other => other.labels.map(({ label }) => label))
      return [...pieces.slice(0, p), ...replaced, ...pieces.slice(p + 1)]
    }
    const labelsAfter = (edits: readonly TextEdit[]) => {
      const file = decode(applyEdits(text, edits))
      return file.documents[0].path!.pieces.map(other => other.labels.map(({ label }) => label))
    }
    const left = labels.slice(0, s + 1)
    const right = labels.slice(s + 1)
    if (left.length > 1 && right.length > 1)
      expect(labelsAfter(breakSegment(text, segment))).toEqual(others([left, right]))
    expect(labelsAfter(insertLabels(text, segment, ['M', 'K1']))).toEqual(
      others([[...left, 'M', 'K1', ...right]]),
    )
    const removal = removeSegment(text, document.path!, segment)
    if (removal.length > 0)
      expect(labelsAfter(removal), text).toEqual(others([left, right].filter(({ length }) => length > 1)))
    else expect(piece.segments.length, 'only a piece that is an item by itself stays').toBe(1)
  })
})

test('a rule is allowed on the line of any place, and again one more', () => {
  overFiles((text, document, pick) => {
    const places = [...document.keys.values()].flatMap(({ key, at }) => [key[0], at[0], at[1]])
    const offset = pick([...places, ...(document.path?.pieces ?? []).map(({ at }) => at[0])])
    const covers = (after: string, rule: string) => {
      const file = decode(after)
      const shifted = lineOfSame(text, after, offset)
      return file.allowances.some(
        ({ line, rules }) => line === shifted && rules.some(({ value }) => value === rule),
      )
    }
    const once = edited(text, insertAllowance(text, offset, 'mesh-uneven'), file => file)
    expect(covers(once, 'mesh-uneven'), `${text}\n⇒\n${once}`).toBe(true)
    const twice = edited(
      once,
      insertAllowance(once, offsetAfter(text, once, offset), 'path-jump'),
      file => file,
    )
    expect(covers(twice, 'mesh-uneven') && covers(twice, 'path-jump'), `${once}\n⇒\n${twice}`).toBe(true)
  })
})

/** Where the character at an offset has gone when something was inserted: the texts end alike from there. */
function offsetAfter(text: string, after: string, offset: number): number {
  let end = 0
  while (end < text.length && text[text.length - 1 - end] === after[after.length - 1 - end]) end++
  return text.length - offset <= end ? offset + after.length - text.length : offset
}
const lineOfSame = (text: string, after: string, offset: number): number =>
  after.slice(0, offsetAfter(text, after, offset)).split('\n').length - 1
