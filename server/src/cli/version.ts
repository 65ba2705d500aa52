/** Put in by the build. */
declare const BRAGGLINE_VERSION: string | undefined

export const VERSION = typeof BRAGGLINE_VERSION === 'string' ? BRAGGLINE_VERSION : 'from source'
