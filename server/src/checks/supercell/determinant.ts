import type { Mat3 } from '../../crystal/vector.ts'

/** The determinant of a matrix of whole numbers, exactly. */
export function integerDeterminant(m: Mat3): bigint {
  const [a, b, c] = m.map(row => row.map(BigInt))
  return (
    a[0] * (b[1] * c[2] - b[2] * c[1]) +
    a[1] * (b[2] * c[0] - b[0] * c[2]) +
    a[2] * (b[0] * c[1] - b[1] * c[0])
  )
}
