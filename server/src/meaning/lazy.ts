/** A value computed at the first call and kept. */
export function lazy<T>(compute: () => T): () => T {
  let done = false
  let value: T
  return () => {
    if (!done) {
      value = compute()
      done = true
    }
    return value
  }
}

/**
 * A small memory of results by their numeric inputs, the latest first. Keys are compared number by number, so a
 * look-up costs one pass over the input and no string.
 */
export class Memo<T> {
  /** How often a result had to be computed; tests count it. */
  computed = 0
  readonly #entries: { key: Float64Array; tag: string; value: T }[] = []

  constructor(private readonly size: number) {}

  /** @param holds a kept result for which it says no is computed anew. */
  get(tag: string, key: Float64Array, compute: () => T, holds: (value: T) => boolean = () => true): T {
    const same = (entry: { tag: string; key: Float64Array }) =>
      entry.tag === tag && sameNumbers(entry.key, key)
    const at = this.#entries.findIndex(entry => same(entry) && holds(entry.value))
    if (at >= 0) {
      const [entry] = this.#entries.splice(at, 1)
      this.#entries.unshift(entry)
      return entry.value
    }
    const value = compute()
    this.computed++
    this.#entries.unshift({ key, tag, value })
    if (this.#entries.length > this.size) this.#entries.pop()
    return value
  }
}

function sameNumbers(u: Float64Array, v: Float64Array): boolean {
  if (u.length !== v.length) return false
  for (let i = 0; i < u.length; i++) if (u[i] !== v[i]) return false
  return true
}
