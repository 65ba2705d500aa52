/** The workspace's settings of what an editor shows and formats. */
export interface EditorSettings {
  readonly codeLens: boolean
  readonly inlayHints: {
    readonly pathLengths: boolean
    readonly zoneNumbers: boolean
    readonly meshCounts: boolean
    readonly volume: boolean
  }
  readonly format: {
    /** Numbers stand below each other. */
    readonly alignColumns: boolean
    /** `-` in a path becomes `–`. */
    readonly enDash: boolean
  }
}

export const DEFAULT_EDITOR_SETTINGS: EditorSettings = {
  codeLens: true,
  // Lenses count the points of meshes already.
  inlayHints: { pathLengths: true, zoneNumbers: true, meshCounts: false, volume: true },
  format: { alignColumns: true, enDash: false },
}

/** Anything that is no truth value is passed over. */
export function readEditorSettings(section: unknown): EditorSettings {
  const { codeLens, inlayHints, format } = DEFAULT_EDITOR_SETTINGS
  const stated = record(section)
  return {
    codeLens: typeof stated.codeLens === 'boolean' ? stated.codeLens : codeLens,
    inlayHints: flags(inlayHints, stated.inlayHints),
    format: flags(format, stated.format),
  }
}

const record = (value: unknown): Record<string, unknown> =>
  typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : {}

function flags<T extends object>(defaults: T, stated: unknown): T {
  const known = Object.entries(record(stated)).filter(
    ([name, value]) => name in defaults && typeof value === 'boolean',
  )
  return { ...defaults, ...Object.fromEntries(known) }
}
