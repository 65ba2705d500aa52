import type { Token } from 'liquidjs'

/** What a form asks for and cannot have, in one line. Its place is that of `token`, else of the tag that it came up in. */
export class FormProblem extends Error {
  token?: Token
}
