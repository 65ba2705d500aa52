/** The label books by the name that a lattice file gives them. */
import type { Book } from './book.ts'
import { BRADLEY_CRACKNELL_1972 } from './bradley-cracknell-1972.ts'
import { HINUMA_2017 } from './hinuma-2017.ts'
import { SETYAWAN_CURTAROLO_2010 } from './setyawan-curtarolo-2010.ts'

export const BOOKS = {
  'setyawan-curtarolo-2010': SETYAWAN_CURTAROLO_2010,
  'hinuma-2017': HINUMA_2017,
  'bradley-cracknell-1972': BRADLEY_CRACKNELL_1972,
} as const satisfies Record<string, Book>

export type BookName = keyof typeof BOOKS
export const BOOK_NAMES = Object.keys(BOOKS) as BookName[]
