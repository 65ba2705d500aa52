/** Hall symbols: S. R. Hall, Acta Cryst. A37, 517 (1981); International Tables, vol. B, appendix A1.4.2. */
import { describe, expect, test } from 'vitest'
import {
  type Operation,
  type SpaceGroupSetting,
  settingOperations,
  spaceGroupSettings,
} from '../../../server/src/crystal/symmetry-library.ts'
import { operationsOfHall } from '../../../server/src/exchange/cif/hall.ts'
import {
  closed,
  operationKey,
  parseTriplet,
  writeTriplet,
} from '../../../server/src/exchange/cif/operations.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'

loadSymmetryFromDisk()
const settings: readonly SpaceGroupSetting[] = Array.from({ length: 230 }, (_, i) =>
  spaceGroupSettings(i + 1),
).flat()
const keys = (operations: readonly Operation[] | undefined) => operations?.map(operationKey).sort()

test('there are 530 tabulated settings', () => expect(settings.length).toBe(530))

// The symmetry library has its operations from a table of its own.
test.each(settings.map(setting => ({ ...setting, setting })))(
  '$hallNumber $hallSymbol',
  ({ hallSymbol, setting }) => {
    const tabulated = closed(settingOperations(setting))
    for (const spelled of [
      hallSymbol,
      hallSymbol.replace(/=/g, '"'),
      hallSymbol.toLowerCase(),
      hallSymbol.replace(/ /g, '_'),
    ]) {
      const found = operationsOfHall(spelled)
      expect(keys(found)).toEqual(keys(tabulated))
    }
    expect(keys(tabulated!.map(each => parseTriplet(writeTriplet(each))!))).toEqual(keys(tabulated))
  },
)

describe('other origins and axes', () => {
  // By hand: the twofold axis along b of P 1 2 1 moved by a quarter along a, x → x + 1/4 in new coordinates.
  test('a shift in twelfths', () => {
    expect(operationsOfHall('P 2y (3 0 0)')?.map(writeTriplet)).toEqual(['x,y,z', '-x+1/2,y,-z'])
  })
  // By hand: (1/2, 1/2, 0) becomes (1/2, 1/2, −1/2).
  test('C 2 in the axes of I 2', () => {
    expect(operationsOfHall('C 2y (x,y,-x+z)')?.map(writeTriplet).sort()).toEqual(
      ['x,y,z', 'x+1/2,y+1/2,z+1/2', '-x,y,-z', '-x+1/2,y+1/2,-z+1/2'].sort(),
    )
  })
  test.each([
    ['P 4 2 (x,y)'],
    ['P 4 2 (1 2 3 4)'],
    ['P 4 2 (x+y,x+y,z)'],
    ['P 2 ('],
    ['X 2'],
    ['P'],
    ['P 7'],
    ['P 5'],
    [''],
    ["P 4'"],
    ['P 2*'],
  ])('%j is none', text => expect(operationsOfHall(text)).toBeUndefined())
})
