/** The row of named switches. */

export function element<E extends HTMLElement = HTMLElement>(id: string): E {
  const found = document.getElementById(id)
  if (!found) throw new Error(`no element ${id}`)
  return found as E
}

/** Every switch and choice by its `data-name`, with its value; those that do something once have none. */
export class Switches {
  readonly values: Record<string, string> = {}
  readonly #controls = new Map<string, HTMLButtonElement | HTMLSelectElement>()

  constructor(
    kept: Readonly<Record<string, unknown>>,
    private readonly changed: (name: string, value: string) => void,
  ) {
    for (const control of document.querySelectorAll<HTMLButtonElement | HTMLSelectElement>('[data-name]')) {
      const name = control.dataset.name!
      this.#controls.set(name, control)
      const isAct = control.dataset.act !== undefined
      const start =
        typeof kept[name] === 'string' && name !== 'write'
          ? (kept[name] as string)
          : (control.dataset.value ?? '')
      if (!isAct) {
        this.values[name] = start
        this.#show(name)
      }
      if (control instanceof HTMLSelectElement)
        control.addEventListener('change', () => {
          const { value } = control
          if (isAct) control.value = ''
          else this.values[name] = value
          this.changed(name, value)
        })
      else control.addEventListener('click', () => this.set(name, this.values[name] === 'on' ? 'off' : 'on'))
    }
  }

  set(name: string, value: string): void {
    this.values[name] = value
    this.#show(name)
    this.changed(name, value)
  }

  enable(which: Readonly<Record<string, boolean>>): void {
    for (const [name, isOn] of Object.entries(which)) {
      const control = this.#controls.get(name)
      if (control) control.disabled = !isOn
    }
  }

  offerZones(last: number): void {
    const control = this.#controls.get('around') as HTMLSelectElement
    for (const option of [...control.options]) {
      const [, n] = /^zone-(\d)$/.exec(option.value) ?? []
      if (n && Number(n) > last) option.remove()
    }
  }

  /** The choices of one select, by their place; a single one is none, and it hides. */
  offer(name: string, choices: readonly string[]): void {
    const control = this.#controls.get(name) as HTMLSelectElement
    control.replaceChildren(...choices.map((choice, i) => new Option(choice, String(i))))
    control.hidden = choices.length < 2
    this.#show(name)
  }

  /** Names of what is on. */
  get summary(): string {
    return Object.entries(this.values)
      .filter(([, value]) => value === 'on')
      .map(([name]) => name)
      .join(' ')
  }

  #show(name: string): void {
    const control = this.#controls.get(name)!
    if (control instanceof HTMLSelectElement) {
      control.value = this.values[name]
      if (control.value !== this.values[name])
        this.values[name] = control.value = control.options[0]?.value ?? ''
    } else control.setAttribute('aria-pressed', String(this.values[name] === 'on'))
  }
}
