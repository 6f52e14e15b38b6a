import type { CertificateFacts } from './facts.ts'
import { ink, page, type Sheet } from './sheet.ts'
import { countWord } from './words.ts'

const size = 7.5

/** The way into the ledger in print, and as files inside the document that the command line checks. */
export function putProof(sheet: Sheet, { proofs }: CertificateFacts, at: Date): void {
  const [main] = proofs
  if (!main) return
  sheet.section('Proof', 60)
  const { leaf, index, path, checkpoint } = main.proof
  const [, count = '', root = ''] = checkpoint.split('\n')
  const signature =
    checkpoint
      .split('\n')
      .at(-2)
      ?.replace(/^\u2014 /, '') ?? ''
  const rows = [
    ['leaf', `${index} ${leaf}`],
    ['root', `${count} ${Buffer.from(root, 'base64').toString('hex')}`],
    ['signature', signature],
  ] as const
  for (const [name, value] of rows) {
    sheet.room(11)
    sheet.put(name, page.left, sheet.y, { size, colour: ink.second })
    sheet.paragraph(value, { size, face: 'mono' }, page.left + 56)
  }
  for (const { number, proof } of proofs) {
    const file = Buffer.from(`${JSON.stringify(proof, null, 2)}\n`)
    const about = { type: 'application/json', creationDate: at, modifiedDate: at }
    sheet.doc.file(file, { ...about, name: nameOf(number), description: `Proof of record ${number}` })
  }
  const files = proofs.map(({ number }) => nameOf(number))
  const [first = ''] = files
  sheet.y += 2
  sheet.paragraph(
    `The path of ${countWord(path.length)} hashes is attached to this document as ${first}${files.length > 1 ? `, beside ${files.slice(1).join(' and ')} of the other records` : ''}. “ogee proof check ${first} --key ogee.pub” checks it without the server.`,
    { size },
  )
}

const nameOf = (number: number) => `proof-${number}.json`
