import type { Vec3 } from './vector.ts'

export const UNITS = ['angstrom', 'nm', 'bohr'] as const
export type Unit = (typeof UNITS)[number]

/** Bohr radius in Å: CODATA 2022 (Mohr, Newell, Taylor and Tiesinga). */
export const BOHR = 0.529177210544
/** ħ²/2mₑ in eV Å²: CODATA 2022. */
export const HBAR2_OVER_2M = 3.809982111

/** How many Å one unit of length is. */
export const IN_ANGSTROM: Record<Unit, number> = { angstrom: 1, nm: 10, bohr: BOHR }
/** How a length and an inverse length are written. */
export const SYMBOL: Record<Unit, string> = { angstrom: 'Å', nm: 'nm', bohr: 'a₀' }
export const INVERSE_SYMBOL: Record<Unit, string> = { angstrom: 'Å⁻¹', nm: 'nm⁻¹', bohr: 'a₀⁻¹' }

export const isFiniteVector = (v: Vec3): boolean => v.every(Number.isFinite)
