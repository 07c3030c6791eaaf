import { mount } from '@vue/test-utils'
import { expect, test } from 'vitest'
import type { Field } from '../../../app/contract/shapes/model.ts'
import FieldForm from '../../../renderer/components/models/FieldForm.vue'
import { rangeWords } from '../../../renderer/components/models/field-words.ts'

const field = (change: Partial<Field> = {}): Field => ({
  key: 'shiftMHz',
  label: 'Shift rate',
  unit: 'MHz',
  kind: 'number',
  choices: [],
  min: 0,
  max: 100_000,
  openMin: true,
  default: 20,
  explanation: 'Scan bits a second.',
  ...change,
})
const form = (values = {}, errors: readonly { key: string; message: string }[] = []) =>
  mount(FieldForm, {
    props: { fields: [field()], values, errors, readOnly: false, currency: '€' },
    attachTo: document.body,
  })

test('what is being typed stands as typed while figures come back, and is saved on leaving', async () => {
  const wrapper = form({ shiftMHz: 5 })
  const input = wrapper.get('input')
  input.element.value = '1.'
  await input.trigger('input')
  await wrapper.setProps({ values: { shiftMHz: 5 } })
  expect(input.element.value).toBe('1.')
  input.element.value = '1.50'
  await input.trigger('input')
  expect(wrapper.emitted('draft')?.at(-1)).toEqual([{ shiftMHz: 1.5 }])
  expect(wrapper.emitted('change')).toBeUndefined()
  await input.trigger('change')
  expect(wrapper.emitted('change')).toEqual([['shiftMHz', 1.5]])
  await input.trigger('blur')
  await wrapper.setProps({ values: { shiftMHz: 1.5 } })
  expect(input.element.value).toBe('1.5')
})

test('an emptied field goes back to its default, which it shows', async () => {
  const wrapper = form({ shiftMHz: 5 })
  const input = wrapper.get('input')
  input.element.value = ' '
  await input.trigger('input')
  await input.trigger('change')
  expect(wrapper.emitted('change')).toEqual([['shiftMHz', null]])
  expect(input.attributes('placeholder')).toBe('20')
})

test('what is refused stays beside its reason, which names the field and is announced', async () => {
  const wrapper = form({ shiftMHz: 5 })
  const input = wrapper.get('input')
  input.element.value = '-3'
  await input.trigger('input')
  await input.trigger('change')
  await input.trigger('blur')
  await wrapper.setProps({
    errors: [{ key: 'shiftMHz', message: '"shiftMHz" is -3.' }],
    values: { shiftMHz: 5 },
  })
  expect(input.element.value).toBe('-3')
  expect(wrapper.get('[role=alert]').text()).toBe('Shift rate is -3.')
  expect(input.attributes('aria-invalid')).toBe('true')
  expect(wrapper.get(`[id="${input.attributes('aria-describedby')}"]`).text()).toContain('Shift rate is -3.')
})

test('what is no number is passed on as it is, to be refused with a reason', async () => {
  const wrapper = form()
  const input = wrapper.get('input')
  input.element.value = 'fast'
  await input.trigger('change')
  expect(wrapper.emitted('change')).toEqual([['shiftMHz', 'fast']])
})

test('ranges say what is allowed, and leave out ends that nobody meets', () => {
  expect(rangeWords(field({ max: 1 }))).toBe('above 0 to 1')
  expect(rangeWords(field({ max: 1e9 }))).toBe('above 0')
  expect(rangeWords(field({ min: 1, openMin: false, max: 4096 }))).toBe('from 1 to 4,096')
  expect(rangeWords(field({ min: 0, openMin: false, max: 1e15 }))).toBe('0 or more')
  expect(rangeWords(field({ kind: 'text' }))).toBe('')
})
