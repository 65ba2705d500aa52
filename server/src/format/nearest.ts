/** The nearest known word, for "did you mean". */

/**
 * Number of edits from one word to another, where an edit inserts, removes or replaces a letter or swaps two
 * neighbours (F. J. Damerau, Commun. ACM 7, 171, 1964; in the restricted form, each letter being edited once).
 * Counting stops at `limit`: what is farther comes back as `limit + 1`.
 */
export function editDistance(from: string, to: string, limit = Number.POSITIVE_INFINITY): number {
  if (Math.abs(from.length - to.length) > limit) return limit + 1
  let before: number[] = []
  let last = Array.from({ length: to.length + 1 }, (_, j) => j)
  for (let i = 1; i <= from.length; i++) {
    const row = [i]
    for (let j = 1; j <= to.length; j++) {
      const same = from[i - 1] === to[j - 1]
      let edits = Math.min(last[j] + 1, row[j - 1] + 1, last[j - 1] + (same ? 0 : 1))
      if (i > 1 && j > 1 && from[i - 1] === to[j - 2] && from[i - 2] === to[j - 1])
        edits = Math.min(edits, before[j - 2] + 1)
      row.push(edits)
    }
    if (Math.min(...row) > limit) return limit + 1
    before = last
    last = row
  }
  return last[to.length]
}

/** Words longer than this are not compared: no known word comes near them, and the time grows with the square. */
const LONGEST = 64

/**
 * The known word that a misspelled one was probably meant to be: the same letters in another case, else the word
 * with the fewest edits, at most one for every three letters. Ties go to the word that begins alike, then to the earlier one.
 */
export function nearest(word: string, known: Iterable<string>): string | undefined {
  if (word === '' || word.length > LONGEST) return undefined
  const folded = word.toLowerCase()
  let best: string | undefined
  let fewest = Math.max(1, Math.floor(word.length / 3))
  let alike = false
  for (const candidate of known) {
    const other = candidate.toLowerCase()
    if (other === folded) return candidate
    const edits = editDistance(folded, other, fewest)
    if (edits > fewest || edits >= Math.max(folded.length, other.length)) continue
    const begins = folded[0] === other[0]
    if (best !== undefined && edits === fewest && (alike || !begins)) continue
    best = candidate
    fewest = edits
    alike = begins
  }
  return best
}
