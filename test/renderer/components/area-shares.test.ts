import { mount } from '@vue/test-utils'
import { expect, test } from 'vitest'
import AreaShares from '../../../renderer/components/models/AreaShares.vue'
import { shareRows, sharesAsText, sumOfShares } from '../../../renderer/components/models/share-rows.ts'

const table = (value: string) =>
  mount(AreaShares, { props: { value, readOnly: false, describedBy: 'about', isWrong: false } })

test('rows go through their text and back; the sum has no noise of binary fractions', () => {
  const rows = shareRows('core/alu,0.1\nbus[3,0],0.2')
  expect(rows[1]).toEqual({ block: 'bus[3,0]', share: '0.2' })
  expect(sharesAsText([...rows, { block: ' ', share: '' }])).toBe('core/alu,0.1\nbus[3,0],0.2')
  expect(sumOfShares(rows)).toBe(0.3)
  expect(sumOfShares(shareRows('a,x'))).toBeNaN()
})

test('a block is added, filled in and taken away; what is typed is told before it is saved', async () => {
  const wrapper = table('')
  await wrapper.get('button').trigger('click')
  expect(wrapper.emitted()).not.toHaveProperty('change')
  await wrapper.get('[aria-label="Block 1"]').setValue('core')
  const share = wrapper.get('[aria-label="Share of block 1"]')
  await share.setValue('0.4')
  expect(wrapper.emitted('draft')?.at(-1)).toEqual(['core,0.4'])
  await share.trigger('change')
  expect(wrapper.emitted('change')?.at(-1)).toEqual(['core,0.4'])
  expect(wrapper.get('tfoot').text()).toContain('0.4')
  await wrapper.get('[aria-label="Remove block 1"]').trigger('click')
  expect(wrapper.emitted('change')?.at(-1)).toEqual([''])
})
