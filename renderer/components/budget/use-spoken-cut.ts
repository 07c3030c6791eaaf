import { onUnmounted, ref, watch } from 'vue'
import type { Cut } from './use-cut.ts'

const REST_MS = 400

/** What screen readers hear of the cut: the sentence and the state, once it has come to rest, not at every step. */
export function useSpokenCut(cut: Cut) {
  const spoken = ref('')
  const heard = ref('')
  let timer: ReturnType<typeof setTimeout> | undefined

  function say(): void {
    spoken.value = cut.sentence.value.map(({ text }) => text).join('')
    heard.value = [cut.state.value?.trouble, cut.state.value?.text].filter(Boolean).join(' ')
  }

  watch(
    [cut.sentence, cut.state],
    () => {
      clearTimeout(timer)
      timer = setTimeout(say, spoken.value === '' ? 0 : REST_MS)
    },
    { immediate: true },
  )
  onUnmounted(() => clearTimeout(timer))

  return { spoken, heard }
}
