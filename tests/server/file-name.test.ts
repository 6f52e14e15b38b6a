import { describe, expect, it } from 'vitest'
import { fileName } from '../../server/http/file-name.ts'
import { runSeed, seededRandom } from '../support/random.ts'

/** RFC 6266 section 4.1 and appendix D; the extended value by RFC 8187 section 3.2.1. */
const form =
  /^attachment; filename="([^"\\\r\n%]*)"; filename\*=UTF-8''((?:[A-Za-z0-9!#$&+.^_`|~-]|%[0-9A-F]{2})*)$/

describe('ASVS V5.4.2 names of files sent out', () => {
  it.each([
    ['records.csv', 'records.csv', 'records.csv'],
    ['Prüfung 7.pdf', 'Pr_fung 7.pdf', 'Prüfung 7.pdf'],
    ['a"b.csv', 'a_b.csv', 'a"b.csv'],
    ["it's (1)*.csv", "it's (1)*.csv", "it's (1)*.csv"],
    ['x\r\nSet-Cookie: a=b.csv', 'x__Set-Cookie: a=b.csv', 'x__Set-Cookie: a=b.csv'],
    ['../../etc/passwd', '_/../etc/passwd'.replaceAll('/', '_'), '_/../etc/passwd'.replaceAll('/', '_')],
    ['a\\b%41.csv', 'a_b_41.csv', 'a_b%41.csv'],
    ['校准.csv', '__.csv', '校准.csv'],
    ['💣.csv', '__.csv', '💣.csv'],
    ['\u202egnp.exe', '_gnp.exe', '_gnp.exe'],
    ['\ud800.csv', '_.csv', '_.csv'],
  ])('%j', (name, plain, encoded) => {
    const match = form.exec(fileName(name))
    expect(match, fileName(name)).not.toBeNull()
    expect([match![1], decodeURIComponent(match![2]!)]).toEqual([plain, encoded])
  })

  it('keeps its form for any text at all', () => {
    const seed = runSeed()
    const random = seededRandom(seed)
    for (let i = 0; i < 5_000; i++) {
      const units = Array.from({ length: random.below(20) }, () =>
        random.below(random.next() < 0.5 ? 0x80 : 0xffff),
      )
      expect(fileName(String.fromCharCode(...units)), `seed ${seed}, ${units}`).toMatch(form)
    }
  })
})
