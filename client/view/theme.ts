/** Every colour comes from the editor's theme. */
export interface Theme {
  readonly ink: string
  readonly faint: string
  readonly paper: string
  readonly face: string
  readonly path: string
  readonly cursor: string
  readonly wedge: string
  readonly mesh: string
  readonly error: string
  readonly warning: string
  readonly info: string
  readonly isHighContrast: boolean
}

export function readTheme(): Theme {
  const style = getComputedStyle(document.documentElement)
  const pick = (...names: string[]): string => {
    for (const name of names) {
      const value = style.getPropertyValue(`--vscode-${name}`).trim()
      if (value) return value
    }
    return '#888888'
  }
  const { classList } = document.body
  return {
    ink: pick('editor-foreground', 'foreground'),
    faint: pick('descriptionForeground', 'foreground'),
    paper: pick('editor-background'),
    face: pick('charts-blue', 'foreground'),
    path: pick('charts-purple', 'foreground'),
    // The orange of the charts lets the ground shine through in newer editors: no colour for a label.
    cursor: pick('symbolIcon-classForeground', 'focusBorder'),
    wedge: pick('charts-green', 'foreground'),
    mesh: pick('charts-green', 'foreground'),
    error: pick('editorError-foreground', 'charts-red'),
    warning: pick('editorWarning-foreground', 'charts-yellow'),
    info: pick('editorInfo-foreground', 'charts-blue'),
    isHighContrast:
      classList.contains('vscode-high-contrast') || classList.contains('vscode-high-contrast-light'),
  }
}

/** Calls back when the theme, the fonts or their contrast may have changed. */
export function onThemeChange(changed: () => void): void {
  const observer = new MutationObserver(changed)
  observer.observe(document.body, { attributes: true, attributeFilter: ['class', 'data-vscode-theme-id'] })
  observer.observe(document.documentElement, { attributes: true, attributeFilter: ['style'] })
}
