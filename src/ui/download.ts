/** Hands a text to the browser as a file. */
export function download(name: string, text: string, type: string): void {
  downloadBlob(name, new Blob([text], { type }))
}

export function downloadBlob(name: string, blob: Blob): void {
  const url = URL.createObjectURL(blob)
  const link = document.createElement('a')
  link.href = url
  link.download = name
  link.click()
  // The browser has taken the content by the next turn of its loop.
  setTimeout(() => URL.revokeObjectURL(url), 0)
}
