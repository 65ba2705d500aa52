import type { Book } from './book.ts'

/** The third axis c is the unit normal of the plane. */
export const PLANE_LATTICES: Book = {
  id: 'plane-lattices',
  source: 'common practice for plane lattices',
  variations: [
    {
      bravais: 'mp',
      condition: 'oblique, reduced, a ≤ b, γ < 90°',
      positive: ['b - a', 'π/2 - γ'],
      reducedCell: ['a - 2*b*cos(γ)'],
      primitive: 'a, b',
      parameters: {
        η: '(1 - a*cos(γ)/b)/(2*sin(γ)^2)',
        ν: '1/2 - η*b*cos(γ)/a',
      },
      points: {
        Γ: '0, 0',
        X: '1/2, 0',
        Y: '0, 1/2',
        C: '1/2, 1/2',
        H: 'η, 1-ν',
        H1: '1-η, ν',
      },
      path: 'Γ–X–H1–C–H–Y–Γ–C',
      doubts: [
        'Letters of the oblique lattice differ between authors (C is also called M, S or A); H and H1 are the corners of the zone.',
      ],
    },
    {
      bravais: 'op',
      condition: 'rectangular',
      primitive: 'a, b',
      points: {
        Γ: '0, 0',
        X: '1/2, 0',
        Y: '0, 1/2',
        S: '1/2, 1/2',
      },
      path: 'Γ–X–S–Y–Γ–S',
      doubts: ['S is also called M or C.'],
    },
    {
      bravais: 'oc',
      condition: 'centred rectangular, a < b',
      positive: ['b - a'],
      primitive: '(a-b)/2, (a+b)/2',
      parameters: {
        ζ: '(1 + a^2/b^2)/4',
      },
      points: {
        Γ: '0, 0',
        S: '0, 1/2',
        Y: '-1/2, 1/2',
        X: 'ζ, ζ',
        X1: '-ζ, 1-ζ',
      },
      path: 'Γ–X–S–X1–Y–Γ–S',
    },
    {
      bravais: 'oc',
      condition: 'centred rectangular, a > b',
      positive: ['a - b'],
      primitive: '(a-b)/2, (a+b)/2',
      parameters: {
        ζ: '(1 + b^2/a^2)/4',
      },
      points: {
        Γ: '0, 0',
        S: '0, 1/2',
        Y: '1/2, 1/2',
        F0: 'ζ, 1-ζ',
        Δ0: '-ζ, ζ',
      },
      path: 'Γ–Δ0–S–F0–Y–Γ–S',
      doubts: ['The path is ours.'],
    },
    {
      bravais: 'tp',
      condition: 'square',
      primitive: 'a, b',
      points: {
        Γ: '0, 0',
        X: '0, 1/2',
        M: '1/2, 1/2',
      },
      path: 'Γ–X–M–Γ',
    },
    {
      bravais: 'hp',
      condition: 'hexagonal, vectors at 120°',
      primitive: 'a, b',
      points: {
        Γ: '0, 0',
        M: '1/2, 0',
        K: '1/3, 1/3',
      },
      path: 'Γ–M–K–Γ',
    },
    {
      bravais: 'hp',
      condition: 'hexagonal, vectors at 60°',
      primitive: 'a, a+b',
      points: {
        Γ: '0, 0',
        M: '1/2, 0',
        K: '2/3, 1/3',
      },
      path: 'Γ–M–K–Γ',
    },
  ],
}
