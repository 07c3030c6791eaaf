import { mount } from '@vue/test-utils'
import { expect, test } from 'vitest'
import type { DiagnosticView } from '../../../app/contract/shapes/diagnostic.ts'
import DiagnosticList from '../../../renderer/components/import/DiagnosticList.vue'

const finding = (change: Partial<DiagnosticView>): DiagnosticView => ({
  code: 'unknown-gate',
  severity: 'error',
  file: 'a.bench',
  line: 4,
  column: 5,
  message: '"NADN" is no gate of this format',
  hint: 'Did you mean "NAND"?',
  notes: [],
  frame: '4 | y = NADN(a, b)\n  |     ^^^^',
  ...change,
})

test('errors come first, each with its word, place, frame and what to do', () => {
  const wrapper = mount(DiagnosticList, {
    props: { diagnostics: [finding({ severity: 'warning', message: 'passed over', line: 1 }), finding({})] },
  })
  const [first, second] = wrapper.findAll('li')
  expect(first!.text()).toContain('Error: "NADN" is no gate of this format')
  expect(first!.text()).toContain('a.bench:4:5')
  expect(first!.get('pre').element.textContent).toBe('4 | y = NADN(a, b)\n  |     ^^^^')
  expect(first!.text()).toContain('Did you mean "NAND"?')
  expect(second!.text()).toContain('Caution: passed over')
  expect(wrapper.get('h3').text()).toContain('1 error, 1 caution')
})

test('where there is nothing to say, nothing stands', () => {
  expect(mount(DiagnosticList, { props: { diagnostics: [] } }).text()).toBe('')
})
