import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { CHECKS } from '../../server/src/checks/index.ts'

interface Setting {
  order?: number
  scope?: string
  default?: unknown
  markdownDescription?: string
  enum?: unknown[]
  enumDescriptions?: string[]
  properties?: Record<string, { enum: string[] }>
}
const read = (name: string) => readFileSync(new URL(`../../${name}`, import.meta.url), 'utf8')
const words = JSON.parse(read('package.nls.json')) as Record<string, string>
/** With its texts in English in their places. */
const { contributes, activationEvents } = JSON.parse(read('package.json'), (_, value: unknown) => {
  const key = typeof value === 'string' ? /^%(.+)%$/.exec(value)?.[1] : undefined
  return key === undefined ? value : words[key]
}) as {
  activationEvents: string[]
  contributes: {
    commands: { command: string; category?: string; title: string }[]
    menus: Record<string, { command: string }[]>
    configuration: { properties: Record<string, Setting> }
  }
}
const settings = Object.entries(contributes.configuration.properties)

describe('settings', () => {
  test.each(settings)('%s says what it is', (name, setting) => {
    expect(name).toMatch(/^braggline\./)
    expect(setting).toMatchObject({
      order: expect.any(Number),
      scope: expect.stringMatching(/^(resource|window)$/),
      markdownDescription: expect.stringMatching(/\.$/),
    })
    expect(setting).toHaveProperty('default')
    if (setting.enum) expect(setting.enumDescriptions).toHaveLength(setting.enum.length)
  })

  test('each has a place of its own', () => {
    expect(new Set(settings.map(([, { order }]) => order)).size).toBe(settings.length)
  })

  test('every rule can be turned off or changed in all files', () => {
    const { properties } = contributes.configuration.properties['braggline.checks']
    expect(Object.keys(properties!).sort()).toEqual(CHECKS.map(({ id }) => id).sort())
    for (const { enum: severities } of Object.values(properties!))
      expect(severities).toEqual(['off', 'info', 'warning', 'error'])
  })
})

test('commands are found under the name of the program', () => {
  for (const { command, category } of contributes.commands) {
    expect(command).toMatch(/^braggline\./)
    expect(category).toBe('Braggline')
  }
})

test('what the client registers is known to the palette, and what a menu offers too', () => {
  const known = contributes.commands.map(({ command }) => command).sort()
  const folder = new URL('../../client/src/', import.meta.url)
  const registered = readdirSync(folder)
    .map(name => readFileSync(new URL(name, folder), 'utf8'))
    .flatMap(text => [...text.matchAll(/\b(?:registerCommand\('braggline\.|register\(')(\w+)'/g)])
    .map(([, name]) => `braggline.${name}`)
  expect(registered.sort()).toEqual(known)
  for (const { command } of Object.values(contributes.menus).flat()) expect(known).toContain(command)
})

test('nothing wakes the extension but lattice files, and a zone view that was left open', () => {
  const known = /^(workspaceContains:\*\*\/\*\.lattice\.ya?ml|onWebviewPanel:braggline\.zoneView)$/
  for (const event of activationEvents) expect(event).toMatch(known)
})
