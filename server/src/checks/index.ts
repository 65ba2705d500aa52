/** The only list of rules. The order is that of the documentation. */
import type { Check } from './check.ts'
import * as file from './file/index.ts'

export const CHECKS: readonly Check[] = [...Object.values(file)] as readonly Check[]
