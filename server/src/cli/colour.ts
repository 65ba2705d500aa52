import type { Io } from './io.ts'

/** Colour only on a terminal that can show it, and never where `NO_COLOR` is set to anything (no-color.org). */
export const coloured = ({ env, out }: Io): boolean => out.isTerminal && !env.NO_COLOR && env.TERM !== 'dumb'
