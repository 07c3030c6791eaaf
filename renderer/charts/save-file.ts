/** Offers bytes or text as a download. */
export function saveFile(name: string, content: BlobPart, mediaType: string): void {
  const url = URL.createObjectURL(new Blob([content], { type: mediaType }))
  const link = document.createElement('a')
  link.href = url
  link.download = name
  link.click()
  setTimeout(() => URL.revokeObjectURL(url), 10_000)
}
