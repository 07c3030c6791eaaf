import { mount } from '@vue/test-utils'
import { expect, test } from 'vitest'
import SensitivityTable from '../../../renderer/components/money/SensitivityTable.vue'
import { moneyView } from '../../helpers/money-view.ts'

const table = (errors: readonly { key: string; message: string }[] = []) =>
  mount(SensitivityTable, { props: { view: moneyView(), cut: 2, values: {}, errors, readOnly: false } })
const labels = (wrapper: ReturnType<typeof table>): string[] =>
  wrapper.findAll('tbody th').map((each) => each.text())

test('the input that moves the figure most stands first, with its bars to scale', () => {
  const wrapper = table()
  expect(labels(wrapper)).toEqual(['Cost of an escape', 'Tester rate'])
  const [low, high] = wrapper.findAll('.bar').map((each) => each.attributes('style'))
  // From 100 to 140, the cut's own 120 in the middle.
  expect(low).toBe('left: 0%; width: 50%;')
  expect(high).toBe('left: 50%; width: 50%;')
  const inner = wrapper.findAll('.bar')[3]?.attributes('style')
  expect(inner).toBe('left: 50%; width: 10%;')
})

test('a range is saved when the field is left, emptied it goes back to what is assumed', async () => {
  const wrapper = table()
  const input = wrapper.get('input[aria-label="Range of cost of an escape"]')
  await input.setValue('5 to 20')
  await input.trigger('change')
  await input.setValue(' ')
  await input.trigger('change')
  expect(wrapper.emitted('range')).toContainEqual(['ranges.escapeCost', '5 to 20'])
  expect(wrapper.emitted('range')?.at(-1)).toEqual(['ranges.escapeCost', null])
})

test('a refused range stays as it was typed, beside its reason', async () => {
  const wrapper = table()
  const input = wrapper.get<HTMLInputElement>('input[aria-label="Range of tester rate"]')
  await input.setValue('9 to 3')
  await input.trigger('change')
  await wrapper.setProps({
    errors: [{ key: 'ranges.costPerHour', message: '"ranges.costPerHour" is 9 to 3; lower first.' }],
  })
  expect(input.element.value).toBe('9 to 3')
  expect(wrapper.get('[role="alert"]').text()).toBe('The range is 9 to 3; lower first.')
})
