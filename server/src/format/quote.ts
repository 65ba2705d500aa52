/** Text as YAML writes it, quoted where some reader would take it for something else. */

/** YAML 1.1 takes these for truth values, and all versions take the last for no value. */
const TAKEN_OTHERWISE = /^(y|n|yes|no|on|off|true|false|null|~)$/i
/** What YAML would take for a number: it comes back as one, perhaps written otherwise. */
const NUMBER_LIKE = /^[-+]?(\.?\d|\.(inf|nan)$)/i
/** Characters that mean something at the start of a plain scalar, and blanks at either end. */
const SPECIAL_START = /^[-?:](\s|$)|^[,[\]{}#&*!|>'"%@`]|^\s|\s$|^---|^\.\.\./
/** What ends a plain scalar, inside of brackets too. */
const SPECIAL_INSIDE = /[,[\]{}]|:(\s|$)|\s#|[\n\r\t]|[^\P{C}\u00ad]/u

export const needsQuotes = (text: string): boolean =>
  text === '' ||
  TAKEN_OTHERWISE.test(text) ||
  NUMBER_LIKE.test(text) ||
  SPECIAL_START.test(text) ||
  SPECIAL_INSIDE.test(text)

/** A text as a scalar on one line, plain where that is safe in every context and for every version of YAML. */
export function scalarText(text: string): string {
  if (!needsQuotes(text)) return text
  return JSON.stringify(text).replace(
    /[\u007f-\u009f\u2028\u2029\ufeff]/g,
    c => `\\u${c.charCodeAt(0).toString(16).padStart(4, '0')}`,
  )
}
