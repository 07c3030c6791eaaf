import { createPinia, setActivePinia } from 'pinia'
import { AppError, type Result } from '../../app/contract/errors.ts'
import type { EventName, EventPayload } from '../../app/contract/events.ts'
import type { InputOf, OperationName, OutputOf } from '../../app/contract/operations.ts'
import { useDoor } from '../../renderer/api/client.ts'

type Answers = {
  [N in OperationName]?: (input: InputOf<N>) => OutputOf<N> | Promise<OutputOf<N>>
}

/** A host of a test's own: answers what it is told to, refuses the rest, and remembers what it was asked. */
export type FakeApi = {
  readonly asked: { readonly name: OperationName; readonly input: unknown }[]
  readonly answers: Answers
  tell<N extends EventName>(name: N, payload: EventPayload<N>): void
}

/** Puts a fake host behind the window, and fresh stores before it. */
export function fakeApi(answers: Answers = {}): FakeApi {
  const asked: FakeApi['asked'] = []
  const listeners = new Map<EventName, Set<(payload: never) => void>>()
  useDoor({
    kind: 'browser',
    chooseProject: null,
    pathOf: () => null,
    async call(name, input): Promise<Result<unknown>> {
      asked.push({ name, input })
      const answer = answers[name] as ((input: unknown) => unknown) | undefined
      if (!answer) return { ok: false, error: { code: 'not-found', message: `Nothing answers ${name}.` } }
      try {
        return { ok: true, value: await answer(input) }
      } catch (error) {
        const code = error instanceof AppError ? error.code : 'bad-input'
        return { ok: false, error: { code, message: (error as Error).message } }
      }
    },
    on(name, listener) {
      const heard = listeners.get(name) ?? new Set()
      listeners.set(name, heard.add(listener as (payload: never) => void))
      return () => heard.delete(listener as (payload: never) => void)
    },
    onReachable: () => () => undefined,
  })
  setActivePinia(createPinia())
  return {
    asked,
    answers,
    tell: (name, payload) => listeners.get(name)?.forEach((listener) => listener(payload as never)),
  }
}
