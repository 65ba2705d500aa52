import { existsSync, readFileSync } from 'node:fs'
import { expect, test } from 'vitest'

const ROOT = new URL('../../../', import.meta.url)
interface Step {
  id: string
  description: string
  media: { svg: string }
  completionEvents: string[]
}
const { contributes } = JSON.parse(readFileSync(new URL('package.json', ROOT), 'utf8')) as {
  contributes: { commands: { command: string }[]; walkthroughs: { steps: Step[] }[] }
}
const words = JSON.parse(readFileSync(new URL('package.nls.json', ROOT), 'utf8')) as Record<string, string>
const commands = contributes.commands.map(({ command }) => command)
const steps = contributes.walkthroughs.flatMap(walkthrough => walkthrough.steps)

test.each(steps.map(step => [step.id, step] as const))(
  '%s: its picture takes the colours of the theme',
  (_, { media }) => {
    expect(existsSync(new URL(media.svg, ROOT))).toBe(true)
    const svg = readFileSync(new URL(media.svg, ROOT), 'utf8')
    expect(svg).toContain('var(--vscode-')
    // The editor shows no style and no script of a picture's own; both would be lost in silence.
    expect(svg).not.toMatch(/\sstyle=|<style|<script|href=/)
    expect(svg).not.toMatch(/(?:fill|stroke)="#/)
  },
)

test.each(steps.map(step => [step.id, step] as const))(
  '%s: what it links to and waits for is there',
  (_, { description, completionEvents }) => {
    const linked = [...words[description.replaceAll('%', '')].matchAll(/\(command:([\w.]+)/g)].map(
      ([, command]) => command,
    )
    expect(linked.length).toBeGreaterThan(0)
    for (const command of linked) expect(commands).toContain(command)
    for (const event of completionEvents) {
      const [, kind, name] = /^(onCommand|onContext):(braggline\..+)$/.exec(event)!
      if (kind === 'onCommand') expect(commands).toContain(name)
    }
  },
)
