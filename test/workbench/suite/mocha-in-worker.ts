/** Mocha's edition for browsers gives its class as a global only. */
import '../../../node_modules/mocha/mocha.js'

export default (globalThis as unknown as { Mocha: unknown }).Mocha
