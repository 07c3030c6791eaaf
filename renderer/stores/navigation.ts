import { defineStore } from 'pinia'
import { shallowRef } from 'vue'
import { hashOf, type Place, placeOf, type ScreenName } from '../navigation.ts'

/** Where one is; the address holds it, so that screens can be linked and Back works. */
export const useNavigation = defineStore('navigation', () => {
  const place = shallowRef<Place>(placeOf(location.hash))

  function go(screen: ScreenName, productId: number | null = null, params: Place['params'] = {}): void {
    const next: Place = { screen, productId, params }
    if (hashOf(next) === hashOf(place.value)) return
    history.pushState(null, '', hashOf(next))
    place.value = next
  }

  /** Changes what the address says of the same screen, without a step to go back to. */
  function replaceParams(params: Place['params']): void {
    place.value = { ...place.value, params }
    history.replaceState(null, '', hashOf(place.value))
  }

  /** Follows Back, Forward and typed addresses; returns what ends that. */
  function follow(): () => void {
    const read = (): void => {
      place.value = placeOf(location.hash)
    }
    window.addEventListener('popstate', read)
    window.addEventListener('hashchange', read)
    return () => {
      window.removeEventListener('popstate', read)
      window.removeEventListener('hashchange', read)
    }
  }

  return { place, go, replaceParams, follow }
})
