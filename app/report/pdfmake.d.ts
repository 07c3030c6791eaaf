/** The part of pdfmake that reports use; the package brings no types. */
declare module 'pdfmake' {
  const pdfmake: {
    setFonts(fonts: object): void
    setUrlAccessPolicy(isAllowed: (url: string) => boolean): void
    setLocalAccessPolicy(isAllowed: (path: string) => boolean): void
    createPdf(document: object): { getBuffer(): Promise<Uint8Array> }
  }
  export default pdfmake
}

declare module 'pdfmake/fonts/Roboto.js' {
  /** Paths of the font files in the package, by style. */
  const roboto: { readonly Roboto: Readonly<Record<'normal' | 'bold' | 'italics' | 'bolditalics', string>> }
  export default roboto
}
