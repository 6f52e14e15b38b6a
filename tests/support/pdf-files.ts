import { inflateSync } from 'node:zlib'

/** The JSON files inside a PDF: each is a deflated stream that holds an object. */
export function filesInPdf(pdf: Buffer): string[] {
  const found: string[] = []
  for (let from = pdf.indexOf('stream\n'); from >= 0; from = pdf.indexOf('stream\n', from + 7)) {
    const end = pdf.indexOf('endstream', from)
    try {
      const content = inflateSync(pdf.subarray(from + 7, end)).toString('utf8')
      if (content.startsWith('{')) found.push(content)
    } catch {
      // Another kind of stream.
    }
  }
  return found
}
