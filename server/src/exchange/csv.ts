/** Comma-separated values (RFC 4180, with plain line ends): numbers in full, texts quoted where they must be. */
export const csv = (rows: readonly (readonly (string | number)[])[]): string =>
  rows.map(row => `${row.map(cell).join(',')}\n`).join('')

const cell = (value: string | number): string => {
  const text = String(value)
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text
}
