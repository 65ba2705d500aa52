/** Plain text in columns, for terminals: widths as they show, nothing that could steer the terminal. */

/** Marks that stand on the character before them. */
const COMBINING = /\p{Mn}|\p{Me}|\u200b|\u200d/u
/** East Asian wide and full-width characters and pictographs take two columns (Unicode Standard Annex 11; common practice). */
const WIDE =
  /[\u1100-\u115f\u2e80-\u303e\u3041-\ua4cf\uac00-\ud7a3\uf900-\ufaff\ufe30-\ufe6f\uff00-\uff60\uffe0-\uffe6]|[\u{1f300}-\u{1faff}]|[\u{20000}-\u{3fffd}]/u

const widthOf = (character: string): number => (COMBINING.test(character) ? 0 : WIDE.test(character) ? 2 : 1)

/** Columns that a text takes on a terminal. */
export function displayWidth(text: string): number {
  if (PRINTABLE_ASCII.test(text)) return text.length
  let width = 0
  for (const character of text) width += widthOf(character)
  return width
}
const PRINTABLE_ASCII = /^[ -~]*$/

/**
 * A text with its control characters made visible, so that a file cannot move the cursor or recolour the terminal, nor
 * turn the writing around.
 */
export const harmless = (text: string): string =>
  text.replace(CONTROL, character => (character === '\t' ? ' ' : '�'))
const CONTROL = /[\u0000-\u001f\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]/g

export type Alignment = 'left' | 'right'

/** Rows as lines with columns of even width, two blanks between them. */
export function inColumns(rows: readonly (readonly string[])[], alignments: readonly Alignment[]): string[] {
  const widths = alignments.map((_, i) => Math.max(...rows.map(row => displayWidth(row[i] ?? ''))))
  return rows.map(row =>
    widths
      .map((width, i) => {
        const cell = row[i] ?? ''
        const blanks = ' '.repeat(width - displayWidth(cell))
        return alignments[i] === 'right' ? blanks + cell : cell + blanks
      })
      .join('  ')
      .trimEnd(),
  )
}

/** Break a paragraph at blanks into lines of at most `width` columns; a longer word stands alone. */
export function wrap(text: string, width: number): string[] {
  const lines: string[] = []
  let line = ''
  for (const word of text.split(/\s+/)) {
    if (line && displayWidth(line) + 1 + displayWidth(word) > width) {
      lines.push(line)
      line = word
    } else line = line ? `${line} ${word}` : word
  }
  return line ? [...lines, line] : lines
}
