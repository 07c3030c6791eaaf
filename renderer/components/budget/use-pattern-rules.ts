import { useBudget } from '../../stores/budget.ts'
import { useChoice } from '../../stores/choice.ts'
import { isListed, type ListKind, withoutRule, withRule } from './constraint-rules.ts'

const WORDS: Readonly<Record<ListKind, string>> = {
  keep: 'kept',
  leaveOut: 'left out',
  first: 'fixed at the front',
}

/** What a press or a key imposes on one pattern; each can be taken back. */
export function usePatternRules() {
  const budget = useBudget()
  const choice = useChoice()

  async function toggle(kind: ListKind, pattern: number): Promise<void> {
    const constraints = budget.assumptions?.constraints ?? null
    if (isListed(constraints, kind, pattern)) return free(pattern)
    await choice.change(`Pattern ${pattern} ${WORDS[kind]}`, {
      constraints: withRule(constraints, kind, pattern),
    })
  }

  async function free(pattern: number): Promise<void> {
    await choice.change(`Rules of pattern ${pattern}`, {
      constraints: withoutRule(budget.assumptions?.constraints ?? null, pattern),
    })
  }

  return { toggle, free }
}
