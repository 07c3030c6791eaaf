export type TextRun = { readonly text: string; readonly isRaised: boolean }

/** Splits a text into runs, so that the bracket in `Y^(1−T)` can be raised instead. */
export function superscripts(text: string): readonly TextRun[] {
  return text
    .split(/(\^\((?:[^()]|\([^()]*\))*\)|\^[A-Za-z0-9]+)/)
    .filter((part) => part !== '')
    .map((part) =>
      part.length > 1 && part.startsWith('^')
        ? {
            text: part.replace(/^\^\(?/, '').replace(part.startsWith('^(') ? /\)$/ : /$/, ''),
            isRaised: true,
          }
        : { text: part, isRaised: false },
    )
}
