/**
 * A lattice file of exactly `lines` lines (30 at least), the same every time, without a finding above info. Atoms stand
 * on a jittered grid, 3 Å apart, so that distances are those of a solid.
 */
export function generatedFile(lines: number): string {
  let state = 12345
  const random = () => {
    state = (state * 1103515245 + 12345) % 2147483648
    return state / 2147483648
  }
  const points = Array.from(
    { length: 6 },
    (_, i) => `  P${i}: [${(i / 16).toFixed(4)}, ${(i / 24).toFixed(4)}, 0.25]`,
  )
  const tail = ['points:', ...points, 'path: P0 – P1 – P2 | P3 – P4 – P5', 'mesh:', '  divisions: [2, 2, 2]']
  const atoms = lines - tail.length - 9
  const cells = Math.ceil(Math.cbrt(atoms + 1))
  const side = 3 * cells
  const sides = [side, side, 3 * Math.ceil(atoms / cells ** 2)]
  const head = ['title: generated', 'unit: angstrom', 'labels: none', 'lattice:', '  vectors:']
  const rows = [0, 1, 2].map(i => `    - [${[0, 1, 2].map(j => (i === j ? sides[i] : 0)).join(', ')}]`)
  const list = Array.from({ length: atoms }, (_, i) => {
    const grid = [i % cells, Math.floor(i / cells) % cells, Math.floor(i / cells / cells)]
    return `  - Si: [${grid.map((g, i) => ((g + 0.3 + 0.1 * random()) / (sides[i] / 3)).toFixed(6)).join(', ')}]`
  })
  return `${[...head, ...rows, 'atoms:', ...list, ...tail].join('\n')}\n`
}
