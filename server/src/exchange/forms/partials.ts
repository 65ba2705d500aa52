/** Partials: which ones a form names, and which names stay inside its folder. */

/** More of them in one form are a mistake or an attack. */
export const MOST_PARTIALS = 64

const TAG = /\{%[\s\S]*?%\}/g
const NAMED = /\b(?:render|include)\s+(?:"([^"\n]*)"|'([^'\n]*)')/g

/** The names that `render` and `include` give in quotes, each once, in order. */
export function partialNames(text: string): string[] {
  const names = [...text.matchAll(TAG)].flatMap(([tag]) =>
    [...tag.matchAll(NAMED)].map(([, double, single]) => double ?? single),
  )
  return [...new Set(names)]
}

/** The partials that a form needs and that are not gathered yet: those of the form and of the partials gathered. */
export function missingPartials(text: string, gathered: Readonly<Record<string, string | null>>): string[] {
  const texts = [text, ...Object.values(gathered).filter(each => each !== null)]
  const names = new Set(texts.flatMap(partialNames))
  return [...names].filter(name => !Object.hasOwn(gathered, name) && !outsideOf(name))
}

/**
 * Why a name leads out of the form's folder, or might; undefined for a good one. Names are relative, with `/`
 * between folders, on every system.
 */
export function outsideOf(name: string): string | undefined {
  const parts = name.split('/')
  if (parts.includes('..')) return 'a partial stands in the folder of its form or below, so `..` is refused'
  if (name.startsWith('/') || /^[a-z]+:/i.test(name))
    return "a partial is named from its form's folder, so an absolute path is refused"
  if (/[\\:\u0000-\u001f]/.test(name))
    return 'the name of a partial has `/` between folders, and no other signs'
  if (parts.some(part => part === '' || part === '.')) return 'this is no name of a partial'
  return undefined
}
