import { existsSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { adderProject, testApplication } from '../helpers/test-application.ts'
import { tempFolder } from '../helpers/temp-folder.ts'

describe('projects', () => {
  test('what was made is there after closing and opening again, in another program', async () => {
    const folder = tempFolder()
    const first = testApplication(folder)
    const { productId } = await adderProject(first)
    const before = await first.call('products.get', { id: productId })
    const { project } = await first.call('projects.current', {})
    await first.application.close()

    const second = testApplication(folder)
    const { projects } = await second.call('projects.recent', {})
    expect(projects).toMatchObject([{ name: 'Adders', found: true, summary: '1 product, 0 runs' }])
    expect(await second.call('projects.open', { path: projects[0]?.path ?? '' })).toEqual(project)
    expect(await second.call('products.get', { id: productId })).toEqual(before)
  })

  test('the list of projects says what the open one holds now', async () => {
    const application = testApplication()
    await adderProject(application)
    expect(await application.call('projects.recent', {})).toMatchObject({
      projects: [{ summary: '1 product, 0 runs' }],
    })
  })

  test('a project that was moved away is shown as missing until it is forgotten', async () => {
    const { call } = testApplication()
    const { path } = await call('projects.create', { name: 'Gone' })
    await call('projects.close', {})
    rmSync(path)
    expect(await call('projects.recent', {})).toMatchObject({ projects: [{ path, found: false }] })
    await expect(call('projects.open', { path })).rejects.toMatchObject({ code: 'not-found' })
    await call('projects.forget', { path })
    expect(await call('projects.recent', {})).toEqual({ projects: [] })
  })

  test('a name becomes a file name that any system takes, and is not taken twice', async () => {
    const { call, folder } = testApplication()
    const { path, name } = await call('projects.create', { name: 'Q3: "late"/hot?' })
    expect([path, name]).toEqual([join(folder, 'projects', 'Q3 late hot.tallycut'), 'Q3: "late"/hot?'])
    await expect(call('projects.create', { name: 'Q3 late hot' })).rejects.toMatchObject({
      code: 'name-taken',
    })
    expect(existsSync(path)).toBe(true)
  })

  test('what is opened in place of another leaves the other closed', async () => {
    const { call } = testApplication()
    const { path } = await call('projects.create', { name: 'One' })
    await call('projects.create', { name: 'Two' })
    expect((await call('projects.open', { path })).name).toBe('One')
  })
})

describe('undo', () => {
  test('a deleted product comes back with all that was in it', async () => {
    const application = testApplication()
    const { productId } = await adderProject(application)
    const { call } = application
    const before = await call('products.get', { id: productId })
    const { undoToken } = await call('products.delete', { id: productId })
    await expect(call('products.get', { id: productId })).rejects.toMatchObject({ code: 'not-found' })
    await call('undo.restore', { undoToken })
    expect(await call('products.get', { id: productId })).toEqual(before)
  })

  test('each deletion comes back by itself, in whatever order', async () => {
    const application = testApplication()
    const { productId, netlistId, patternSetId } = await adderProject(application)
    const { call } = application
    const patterns = await call('patternSets.delete', { id: patternSetId })
    const netlist = await call('netlists.delete', { id: netlistId })
    await call('undo.restore', netlist)
    const between = await call('products.get', { id: productId })
    expect([between.netlists.length, between.patternSets.length]).toEqual([1, 0])
    await call('undo.restore', patterns)
    expect((await call('products.get', { id: productId })).patternSets).toHaveLength(1)
    await expect(call('undo.restore', patterns)).rejects.toMatchObject({ code: 'not-found' })
  })

  test('a name that was given away since stands in the way, and nothing is half restored', async () => {
    const { call } = testApplication()
    await call('projects.create', { name: 'P' })
    const { id } = await call('products.create', { name: 'Same' })
    const deleted = await call('products.delete', { id })
    const other = await call('products.create', { name: 'Same' })
    await expect(call('undo.restore', deleted)).rejects.toMatchObject({ code: 'name-taken' })
    await call('products.update', { id: other.id, name: 'Other' })
    await call('undo.restore', deleted)
    const { project } = await call('projects.current', {})
    expect(project?.products.map(({ name }) => name)).toEqual(['Same', 'Other'])
  })

  test('ends with the project: what was deleted is gone from the file', async () => {
    const application = testApplication()
    const { productId } = await adderProject(application)
    const { call } = application
    const { project } = await call('projects.current', {})
    const { undoToken } = await call('products.delete', { id: productId })
    await call('projects.close', {})
    await call('projects.open', { path: project?.path ?? '' })
    await expect(call('undo.restore', { undoToken })).rejects.toMatchObject({ code: 'not-found' })
  })
})
