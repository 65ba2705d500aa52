/** Words about what the trade knows by name, in Markdown: hovers and the long text of completion say the same. */
import { RULES } from '../analysis.ts'
import { BRAVAIS, type BravaisType, CENTRING_TABLES } from '../crystal/bravais.ts'
import { elementOf } from '../crystal/elements.ts'
import { namedSpaceGroup } from '../crystal/space-group.ts'
import { IN_ANGSTROM, SYMBOL, UNITS } from '../crystal/units.ts'
import { findKey } from '../format/keys.ts'
import { plain } from '../meaning/wording.ts'

export const table = (head: readonly string[], rows: readonly (readonly string[])[]): string =>
  [head, head.map((_, i) => (i > 0 && head.length > 2 ? '---:' : '---')), ...rows]
    .map(cells => `| ${cells.join(' | ')} |`)
    .join('\n')

const RADIUS_SOURCE = 'B. Cordero et al., Dalton Trans. 2008, 2832'

export function aboutElement(symbol: string): string | undefined {
  const element = elementOf(symbol)
  if (!element) return undefined
  const { name, number, covalentRadius: radius } = element
  const size =
    radius === undefined
      ? 'No covalent radius is at hand.'
      : `Covalent radius ${radius} Å (${RADIUS_SOURCE}).`
  return `**${symbol}** · ${name}, atomic number ${number}\n\n${size}`
}

/** Parameter sets as one says them: `a c, or a alpha`. */
const freeSets = (type: BravaisType): string => BRAVAIS[type].free.map(set => set.join(' ')).join(', or ')

export function aboutBravais(type: BravaisType): string {
  const { words, system, centring, dimension } = BRAVAIS[type]
  const points = CENTRING_TABLES[centring].points
  return `**${type}** · ${words} lattice\n\n${table(
    ['', ''],
    [
      [dimension === 3 ? 'lattice system' : 'plane system', system],
      [
        'centring',
        `${centring}, ${points} lattice ${points === 1 ? 'point' : 'points'} in the conventional cell`,
      ],
      ['takes', freeSets(type)],
    ],
  )}`
}

export function aboutRule(id: string): string | undefined {
  const rule = RULES.find(check => check.id === id)
  return rule && `**${id}** · ${rule.severity}\n\n${rule.summary}\n\n${rule.why}`
}

export function aboutGroup(name: number | string): string | undefined {
  const group = namedSpaceGroup(name)
  if (!group) return undefined
  const { number, symbol, pointGroup, bravais } = group
  return `**${symbol}** · space group ${number}\n\n${table(
    ['', ''],
    [
      ['point group', pointGroup],
      ['lattice', `${BRAVAIS[bravais].words} (${bravais})`],
    ],
  )}`
}

/** One word of those that a key takes. */
export function aboutWord(path: string, word: string): string | undefined {
  const row = findKey(path.split('.'))
  if (row?.path === 'lattice.bravais' && word in BRAVAIS) return aboutBravais(word as BravaisType)
  const known = row?.words?.find(each => each.word === word)
  if (!known) return undefined
  const unit = path === 'unit' ? UNITS.find(each => each === word) : undefined
  if (!unit) return `**${word}** · ${known.meaning}`
  const others = UNITS.filter(each => each !== unit)
    .map(each => `${plain(IN_ANGSTROM[unit] / IN_ANGSTROM[each], 6)} ${SYMBOL[each]}`)
    .join(' = ')
  return `**${word}** · 1 ${SYMBOL[unit]} = ${others}\n\nThe unit of every length; reciprocal quantities are in its inverse, with the factor 2π.`
}
