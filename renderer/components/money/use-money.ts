import { onMounted, onUnmounted, ref, shallowRef } from 'vue'
import { AppError } from '../../../app/contract/errors.ts'
import type { MoneyView } from '../../../app/contract/shapes/money.ts'
import { api } from '../../api/client.ts'
import { clamp } from '../../charts/plot-geometry.ts'
import { useCutSubject } from '../../stores/cut-subject.ts'
import type { CutSubject } from '../../stores/dialogs.ts'

type State =
  | { readonly status: 'loading' }
  | { readonly status: 'no-run' }
  | { readonly status: 'ready'; readonly view: MoneyView }
  | { readonly status: 'failed'; readonly message: string }

/** A moving cut waits so long before what hangs on it alone is worked out again. */
const SETTLE_MS = 150

/** The money of a product's cut; curves are here at once for every cut, the rest follows when the cut rests. */
export function useMoney(productId: number) {
  const subjects = useCutSubject()
  const state = shallowRef<State>({ status: 'loading' })
  const subject = shallowRef<CutSubject | null>(null)
  const cut = ref(0)
  /** What hangs on the cut alone is of an earlier one. */
  const isStale = ref(false)
  /** Why figures of before are still shown. */
  const problem = ref<string | null>(null)
  let asked = 0
  let settling: ReturnType<typeof setTimeout> | undefined

  async function load(): Promise<void> {
    const mine = ++asked
    try {
      subject.value ??= await subjects.get(productId)
      if (subject.value === null) {
        state.value = { status: 'no-run' }
        return
      }
      const view = await api.call('budgets.money', subject.value)
      if (mine !== asked) return
      cut.value = view.cut
      state.value = { status: 'ready', view }
      isStale.value = false
      problem.value = null
    } catch (error) {
      if (!(error instanceof AppError)) throw error
      if (mine !== asked) return
      if (state.value.status === 'ready') problem.value = error.message
      else state.value = { status: 'failed', message: error.message }
    }
  }

  function moveTo(next: number): void {
    if (state.value.status !== 'ready' || subject.value === null) return
    cut.value = clamp(Math.round(next), 0, state.value.view.patterns)
    subject.value = { ...subject.value, cut: cut.value }
    subjects.set(productId, subject.value)
    isStale.value = true
    // An answer that is still on its way is about an earlier cut.
    asked++
    clearTimeout(settling)
    settling = setTimeout(() => void load(), SETTLE_MS)
  }

  let stop: (() => void) | undefined
  onMounted(() => {
    void load()
    stop = api.on('changed', ({ noun, productId: changed }) => {
      if (noun === 'tester' || (noun === 'product' && changed === productId)) void load()
    })
  })
  onUnmounted(() => {
    clearTimeout(settling)
    stop?.()
  })

  return { state, problem, subject, cut, isStale, moveTo, load }
}
