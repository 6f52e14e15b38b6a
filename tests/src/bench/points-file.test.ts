import { expect, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { readPointsFile } from '../../../src/features/bench/points-file.ts'
import { exampleDesign } from '../../support/solver-fixtures.ts'

const design = designDocument.parse(exampleDesign('unipolar-18'))
const csv = 'unit,channel,code,measured\nGerät 7,1,0,0\nGerät 7,1,262143,9.9999\n'

/** What people drop by mistake, each under the name of a CSV. */
const others: Record<string, number[]> = {
  'a PNG': [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 0x0d],
  'a JPEG': [0xff, 0xd8, 0xff, 0xe0, 0, 0x10],
  'a spreadsheet (ZIP)': [0x50, 0x4b, 0x03, 0x04, 0x14, 0, 0x06, 0, 0x08, 0, 0, 0, 0x21, 0, 0xc3, 0x28],
  'an old spreadsheet': [0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1],
  gzip: [0x1f, 0x8b, 0x08, 0, 0, 0, 0, 0],
  'UTF-16': [0xff, 0xfe, ...[...csv].flatMap((letter) => [letter.charCodeAt(0), 0])],
  'Latin-1': [...csv].map((letter) => letter.charCodeAt(0)),
}

test.each(Object.entries(others))(
  'ASVS V5.2.2 %s under the name of a CSV is refused as what it is',
  async (_, bytes) => {
    const file = new File([new Uint8Array(bytes)], 'points.csv', { type: 'text/csv' })
    await expect(readPointsFile(file, design)).rejects.toThrow(
      'points.csv is not UTF-8 text. Save it as CSV in UTF-8.',
    )
  },
)

test('ASVS V5.2.2 text that is no points CSV is refused by its header', async () => {
  const file = new File(['%PDF-1.7\n1 0 obj\n'], 'points.csv')
  await expect(readPointsFile(file, design)).rejects.toThrow(/^Line 1, column 1: Column %PDF-1.7 is unknown/)
})

test('UTF-8 is taken whole, with or without its mark', async () => {
  for (const mark of ['', '\ufeff']) {
    const { groups, problems } = await readPointsFile(new File([mark + csv], 'points.csv'), design)
    expect(problems).toEqual([])
    expect(groups.map(({ unit, points }) => [unit, points.length])).toEqual([['Gerät 7', 2]])
  }
})
