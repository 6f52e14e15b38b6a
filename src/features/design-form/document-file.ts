import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { limits } from '../../../shared/limits.ts'

/** A design document as a file: the same keys in the same order as the contract has them. */
export const documentText = (design: Design): string => `${JSON.stringify(design, null, 2)}\n`

export type ReadFile = { design: Design } | { refusal: string }

/** Reads a file that was chosen or dropped; a refusal names the place in the document. */
export async function readDocumentFile(file: File): Promise<ReadFile> {
  if (file.size > limits.bodyMaxBytes) return { refusal: `${file.name} is larger than 1 MB.` }
  return readDocumentText(await file.text(), file.name)
}

export function readDocumentText(text: string, name: string): ReadFile {
  let value: unknown
  try {
    value = JSON.parse(text.replace(/^\uFEFF/, ''))
  } catch {
    return { refusal: `${name} is not JSON. A design document is a .json file as "Export" writes it.` }
  }
  const format = typeof value === 'object' && value !== null ? (value as { format?: unknown }).format : null
  if (format !== 'ogee.design/1') {
    const said = typeof format === 'string' ? `is of format ${format.slice(0, 40)}` : 'states no format'
    return { refusal: `${name} ${said}; this page reads ogee.design/1.` }
  }
  const parsed = designDocument.safeParse(value)
  if (parsed.success) return { design: parsed.data }
  const [first] = parsed.error.issues
  const more = parsed.error.issues.length - 1
  const rest = more > 0 ? ` And ${more} more.` : ''
  return { refusal: `${name}, /${first?.path.map(String).join('/') ?? ''}: ${first?.message ?? ''}${rest}` }
}
