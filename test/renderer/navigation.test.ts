import { expect, test } from 'vitest'
import { hashOf, placeOf, SCREENS, START } from '../../renderer/navigation.ts'

test('every place survives its address', () => {
  for (const screen of SCREENS) {
    for (const params of [{}, { run: '14', cut: '330' }, { name: 'a b&c=d/ü' }]) {
      const place = {
        screen,
        productId: screen === 'start' ? null : 7,
        params: screen === 'start' ? {} : params,
      }
      expect(placeOf(hashOf(place))).toEqual(place)
    }
  }
})

test('an address that names nothing leads to the projects', () => {
  for (const hash of [
    '',
    '#',
    '#/',
    '#/nowhere',
    '#/products/0/budget',
    '#/products/x/budget',
    '#budget',
    '#/products/3',
  ])
    expect([hash, placeOf(hash)]).toEqual([hash, START])
})
