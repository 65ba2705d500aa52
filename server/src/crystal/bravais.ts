/** The Bravais types, their centrings and the parameters that each leaves free. */
export const BRAVAIS_TYPES_3D = ['cP', 'cF', 'cI', 'tP', 'tI', 'oP', 'oC', 'oA', 'oB', 'oF', 'oI', 'hP', 'hR', 'mP', 'mA', 'mB', 'mC', 'mI', 'aP'] as const
export const BRAVAIS_TYPES_2D = ['tp', 'op', 'oc', 'hp', 'mp'] as const
export const BRAVAIS_TYPES = [...BRAVAIS_TYPES_3D, ...BRAVAIS_TYPES_2D] as const
export type BravaisType = (typeof BRAVAIS_TYPES)[number]
export const CENTRINGS = ['P', 'A', 'B', 'C', 'I', 'F', 'R'] as const
export type Centring = (typeof CENTRINGS)[number]
