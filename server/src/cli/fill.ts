import { readFileSync, realpathSync } from 'node:fs'
import { basename, dirname, join, resolve, sep } from 'node:path'
import { formData } from '../exchange/forms/data.ts'
import { faultLine, LONGEST_FORM, type Partials } from '../exchange/forms/form.ts'
import { missingPartials, MOST_PARTIALS } from '../exchange/forms/partials.ts'
import { harmless } from '../exchange/layout.ts'
import { meshesOf } from '../meaning/sampling.ts'
import { nearest } from '../format/nearest.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { count } from '../meaning/wording.ts'
import { reason, readText, STANDARD_INPUT } from './files.ts'
import { type Io, Refusal } from './io.ts'
import { Desk } from './output.ts'
import { onePick } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, NOT_DONE, OUTPUT, OVERWRITE, type Verb } from './verb.ts'
import { VERSION } from './version.ts'

export const fill: Verb = {
  name: 'fill',
  operands: 'FORM FILE',
  summary: "a form of your own, filled with everything that is known of a file's crystal",
  about: [
    "A form is a text with places to be filled in: vectors in any unit, atoms, k-points, weights, counts. It is how any program's input is made from a lattice file. docs/forms.md tells how to write one and what it may use.",
    'A form runs no code and reads no file but partials in its own folder. Only a file without errors is filled in.',
  ],
  options: [
    { name: 'mesh', value: 'NAME', help: 'Which mesh `mesh` means, where the file names several.' },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: ['braggline fill forms/bands.liquid lead-telluride.lattice.yaml -o bands.txt'],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const [form, ...operands] = given.operands
    if (form === undefined || operands.length === 0)
      throw new Refusal('a form and a lattice file are taken: braggline fill FORM FILE')
    if (form === STANDARD_INPUT)
      throw new Refusal('the form is a file; standard input may be the lattice file')
    const { text } = await formText(form, io)
    const partials = partialsOf(form, text, io)
    const { crystal, snapshot, ordinal, name } = await onePick({ ...given, operands }, io, engine)
    const analysis = snapshot.documents[ordinal]
    const findings = snapshot.findings.filter(({ document }) => document === analysis.document.number)
    const errors = findings.filter(({ severity }) => severity === 'error').length
    if (errors > 0)
      throw new Refusal(
        `${name} has ${count(errors, 'error')}, so no form is filled; \`braggline check\` says why`,
      )
    const mesh = given.value('mesh')
    if (mesh !== undefined) checkMesh(mesh, crystal)
    const known = formData({
      file: name,
      analysis,
      findings,
      texts: [text, ...Object.values(partials).filter(each => each !== null)],
      mesh,
      version: VERSION,
      date: today(io.env),
    })
    if ('refused' in known) throw new Refusal(`${form}: ${known.refused}`)
    const outcome = await io.fillForm({ name: form, text, partials, ...known })
    if ('fault' in outcome) {
      desk.note(`${harmless(faultLine(outcome.fault))}\n`)
      return NOT_DONE
    }
    desk.result(outcome.text)
    await desk.close()
    return CLEAN
  },
}

async function formText(name: string, io: Io): Promise<{ text: string }> {
  const form = await readText(name, io, 'form')
  if (form.text.length > LONGEST_FORM)
    throw new Refusal(`${name}: a form of over ${LONGEST_FORM.toLocaleString('en')} characters is not read`)
  return form
}

/** The partials that the form and its partials name, read from the form's folder and never from outside it. */
function partialsOf(form: string, text: string, { cwd }: Io): Partials {
  const folder = realpathSync(dirname(resolve(cwd, form)))
  const partials: Record<string, string | null> = Object.create(null)
  for (let missing = missingPartials(text, partials); missing.length > 0; ) {
    for (const name of missing) partials[name] = partialText(folder, name)
    if (Object.keys(partials).length > MOST_PARTIALS)
      throw new Refusal(`${form}: it has over ${MOST_PARTIALS} partials`)
    missing = missingPartials(text, partials)
  }
  return partials
}

function partialText(folder: string, name: string): string | null {
  const path = join(folder, ...name.split('/'))
  try {
    if (!realpathSync(path).startsWith(folder.endsWith(sep) ? folder : folder + sep))
      throw new Refusal(`${name}: this partial is a link out of the folder of its form, so it is not read`)
    return new TextDecoder('utf-8', { fatal: true }).decode(readFileSync(path))
  } catch (error) {
    if (error instanceof Refusal) throw error
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null
    throw new Refusal(`${basename(path)}: ${error instanceof TypeError ? 'not UTF-8 text' : reason(error)}`)
  }
}

function checkMesh(name: string, crystal: Crystal): void {
  const known = meshesOf(crystal).flatMap(({ name }) => name ?? [])
  if (known.includes(name)) return
  const near = nearest(name, known)
  throw new Refusal(`no mesh is named ${name}${near ? `; did you mean ${near}?` : ''}`)
}

/** In Greenwich, or of the moment that reproducible builds set. */
function today(env: Io['env']): string {
  const seconds = Number(env.SOURCE_DATE_EPOCH)
  const moment =
    env.SOURCE_DATE_EPOCH && Number.isSafeInteger(seconds) ? new Date(seconds * 1000) : new Date()
  return moment.toISOString().slice(0, 10)
}
