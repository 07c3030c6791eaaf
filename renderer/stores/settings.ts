import { defineStore } from 'pinia'
import { computed, ref } from 'vue'
import type { Settings } from '../../app/contract/operations.ts'
import { api } from '../api/client.ts'
import { paletteOf, type Scheme } from '../tokens.ts'

/** The user's settings and the colours that follow from them and from the system. */
export const useSettings = defineStore('settings', () => {
  const settings = ref<Settings>({ theme: 'system', singleKeys: true, zoom: 1 })
  const systemIsDark = ref(false)
  const moreContrast = ref(false)

  const scheme = computed<Scheme>(() => {
    if (settings.value.theme !== 'system') return settings.value.theme
    return systemIsDark.value ? 'dark' : 'light'
  })
  const palette = computed(() => paletteOf(scheme.value, moreContrast.value))

  async function load(): Promise<void> {
    settings.value = await api.call('settings.get', {})
  }

  async function change(part: Partial<Settings>): Promise<void> {
    settings.value = { ...settings.value, ...part }
    settings.value = await api.call('settings.set', part)
  }

  /** Follows the system's colour scheme and contrast; returns what ends that. */
  function followSystem(): () => void {
    const dark = matchMedia('(prefers-color-scheme: dark)')
    const contrast = matchMedia('(prefers-contrast: more)')
    const read = (): void => {
      systemIsDark.value = dark.matches
      moreContrast.value = contrast.matches
    }
    read()
    dark.addEventListener('change', read)
    contrast.addEventListener('change', read)
    return () => {
      dark.removeEventListener('change', read)
      contrast.removeEventListener('change', read)
    }
  }

  return { settings, systemIsDark, moreContrast, scheme, palette, load, change, followSystem }
})
