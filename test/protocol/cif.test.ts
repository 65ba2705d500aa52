import { afterEach, expect, test } from 'vitest'
import {
  EXPORT_CIF,
  type ExportCifResult,
  IMPORT_CIF,
  type ImportCifResult,
} from '../../server/src/protocol.ts'
import { Client, MODERN } from './client.ts'

let client: Client | undefined
afterEach(async () => {
  await client?.stop()
  client = undefined
})

const LATTICE = 'lattice: {bravais: cP, a: 4.12}\natoms: [Cs: [0, 0, 0], Cl: [1/2, 1/2, 1/2]]\n'

test('a CIF out and in again', async () => {
  client = await Client.start(MODERN)
  await client.open(LATTICE)
  const { uri, connection } = client
  const ask = { uri, version: 1, position: { line: 0, character: 0 }, source: 'salt.lattice.yaml' }
  const written = await connection.sendRequest<ExportCifResult>(EXPORT_CIF, ask)
  expect(written.text).toMatch(/_space_group_IT_number +221\n/)
  const read = await connection.sendRequest<ImportCifResult>(IMPORT_CIF, {
    text: written.text,
    source: 'salt.cif',
  })
  expect(read).toMatchObject({ name: 'salt', losses: [], notes: [] })
  expect(read.text).toMatch(/bravais: cP\n {2}a: 4.12\n/)
})

test('what cannot be carried over is told with its line', async () => {
  client = await Client.start(MODERN)
  await client.open(LATTICE)
  const text = 'data_x\n_cell_length_a 4\n_cell_length_b 4\n_cell_length_c x\n'
  const read = await client.connection.sendRequest<ImportCifResult>(IMPORT_CIF, { text, source: 'x.cif' })
  expect(read.text).toBeNull()
  expect(read.losses).toEqual(['line 4, column 16: _cell_length_c is x, which is no number'])
})
