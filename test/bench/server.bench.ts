import { generatedFile } from './generate.ts'
import { Client, MODERN } from '../protocol/client.ts'

/** From the start of the process to the answer of the first pull, in ms. */
async function startToFindings(text: string, rounds: number): Promise<number[]> {
  const samples: number[] = []
  for (let i = 0; i < rounds; i++) {
    const started = performance.now()
    const client = await Client.start(MODERN)
    await client.open(text)
    await client.pull()
    samples.push(performance.now() - started)
    await client.stop()
  }
  return samples
}

/** From the change of one digit to the answer of the pull, in ms. */
async function editToFindings(text: string, rounds: number): Promise<number[]> {
  const client = await Client.start(MODERN)
  await client.open(text)
  const middle = text.indexOf('.', text.length >> 1) + 1
  const samples: number[] = []
  for (let i = -10; i < rounds; i++) {
    const edited = `${text.slice(0, middle)}${(i + 10) % 10}${text.slice(middle + 1)}`
    const started = performance.now()
    await client.change(edited)
    await client.pull()
    if (i >= 0) samples.push(performance.now() - started)
  }
  await client.stop()
  return samples
}

export const benches = [40, 4000].flatMap(lines => [
  {
    name: `server: start to first diagnostics, ${lines} lines`,
    unit: 'ms',
    run: () => startToFindings(generatedFile(lines), 9),
  },
  {
    name: `server: edit to diagnostics, ${lines} lines`,
    unit: 'ms',
    run: () => editToFindings(generatedFile(lines), lines > 1000 ? 30 : 100),
  },
])
