/** Rock-salt lead telluride, a = 6.462 Å at room temperature (common practice), with one slip of the pen. */
export const SAMPLE = `title: Lead telluride, rock salt
unit: angstrom
lattice:
  bravais: cF
  a: 6.462
atoms:
  - Pb: [0, 0, 0]
  - Te: [1/2, 1/2, 1/2]
path: Γ – X – Ww – K – Γ – L | U – X
sampling:
  spacing: 0.02
mesh:
  divisions: [12, 12, 12]
`
