import type { OperationName, OutputOf, ParsedInputOf } from './operations.ts'

/** What services offer: one function for every operation of the contract. */
export type Handlers = {
  readonly [N in OperationName]: (input: ParsedInputOf<N>) => OutputOf<N> | Promise<OutputOf<N>>
}
