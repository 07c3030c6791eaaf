import { flushPromises, mount } from '@vue/test-utils'
import { beforeEach, expect, test } from 'vitest'
import RecentProjects from '../../../renderer/components/start/RecentProjects.vue'
import OpenProjectDialog from '../../../renderer/components/dialogs/OpenProjectDialog.vue'
import { useDialogs } from '../../../renderer/stores/dialogs.ts'
import { useNavigation } from '../../../renderer/stores/navigation.ts'
import { useNotices } from '../../../renderer/stores/notices.ts'
import { useProject } from '../../../renderer/stores/project.ts'
import { fakeApi, type FakeApi } from '../../helpers/fake-api.ts'

let host: FakeApi
beforeEach(async () => {
  host = fakeApi({
    'projects.recent': () => ({
      projects: [
        { path: '/p/metering.tallycut', name: 'metering', openedAtMs: 0, found: true, summary: '3 products' },
        { path: '/gone/old.tallycut', name: 'old', openedAtMs: 0, found: false, summary: '' },
      ],
    }),
    'projects.forget': () => ({}),
    'projects.open': ({ path }) => ({
      path,
      name: 'metering',
      readOnly: false,
      notice: null,
      products: [{ id: 7, name: 'Betony', coverage: null }],
      testers: 0,
    }),
  })
  await useProject().loadRecents()
})

test('a project that is missing is said to be, can not be opened, and can leave the list', async () => {
  const [, missing] = mount(RecentProjects).findAll('tbody tr')
  expect(missing!.text()).toContain('not found')
  const buttons = missing!.findAll('button')
  expect(buttons.map((button) => button.attributes('aria-label'))).toEqual([
    'Locate old…',
    'Remove old from this list',
  ])
  await buttons[1]!.trigger('click')
  expect(host.asked.find(({ name }) => name === 'projects.forget')?.input).toEqual({
    path: '/gone/old.tallycut',
  })
})

test('opening one leads to its first product', async () => {
  const wrapper = mount(RecentProjects)
  expect(wrapper.text()).toContain('3 products')
  await wrapper.get('tbody button').trigger('click')
  await flushPromises()
  expect(useNavigation().place).toMatchObject({ screen: 'product', productId: 7 })
})

test('one that can not be opened says why', async () => {
  host.answers['projects.open'] = () => {
    throw new Error('The project file is damaged. It was left as it is.')
  }
  await mount(RecentProjects).get('tbody button').trigger('click')
  await flushPromises()
  expect(useNotices().notices[0]).toMatchObject({
    title: 'The project could not be opened',
    text: 'The project file is damaged. It was left as it is.',
  })
})

test('one that was moved is located: what is opened takes its place in the list', async () => {
  await mount(RecentProjects).get('[aria-label="Locate old…"]').trigger('click')
  const { open } = useDialogs()
  expect(open).toMatchObject({ kind: 'open-project', missing: { path: '/gone/old.tallycut' } })
  const dialog = mount(OpenProjectDialog, {
    props: { missing: open?.kind === 'open-project' ? open.missing : undefined },
    attachTo: document.body,
  })
  const field = dialog.get('input')
  expect(field.element.value).toBe('/gone/old.tallycut')
  await field.setValue('/new/old.tallycut')
  await dialog.get('form').trigger('submit')
  await flushPromises()
  const asked = host.asked.filter(({ name }) => name === 'projects.open' || name === 'projects.forget')
  expect(asked.map(({ input }) => (input as { path: string }).path)).toEqual([
    '/new/old.tallycut',
    '/gone/old.tallycut',
  ])
})
