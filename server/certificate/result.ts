import type { CertificateFacts } from './facts.ts'
import { ink, page, type Sheet } from './sheet.ts'
import { putVerdict } from './verdict.ts'
import { countWord, number, quantity, whole } from './words.ts'

/** The result in words beside the codes, and what must be known with it. */
export function putResult(sheet: Sheet, facts: CertificateFacts): void {
  sheet.section('Result', 70)
  const top = sheet.y
  const middle = page.left + 252
  putVerdictLine(sheet, facts, top)
  sheet.y = top + 18
  sheet.paragraph(sentence(facts), {}, page.left, middle - 14 - page.left)
  const words = sheet.y
  const codes = putCodes(sheet, facts, middle, top)
  sheet.y = Math.max(words, codes) + 2
  for (const warning of warnings(facts)) {
    sheet.paragraph(warning, { face: 'strong', colour: ink.caution })
  }
}

function putVerdictLine(sheet: Sheet, { subject, left, trim }: CertificateFacts, y: number): void {
  const judged = left ?? trim ?? subject
  if (judged.verdict === null) return
  const end = putVerdict(sheet, judged.verdict, page.left, y, { size: 11 })
  const count = left?.result.points.length ?? 0
  const where =
    left === null
      ? ''
      : left.verdict === 'pass'
        ? ` at all ${countWord(count)} codes.`
        : ` at the worst of ${countWord(count)} codes.`
  sheet.put(where, end, y, { size: 11 })
}

function sentence({ left, trim }: CertificateFacts): string {
  if (left) {
    const { rule, toleranceV, tur, worst } = left.result
    const judged =
      rule === 'guarded'
        ? 'guarded by U: pass when |error| is at most the tolerance less U'
        : 'simple acceptance: pass when |error| is at most the tolerance'
    const ratio = tur === null ? '' : ` Test uncertainty ratio ${number(tur, 1)}.`
    return `Tolerance ${quantity(toleranceV, 'V')}, ${judged}. Worst as left ${number(worst.errorLsb, 2, true)} LSB at code ${whole(worst.code)}.${ratio}`
  }
  if (trim?.result.trim.predicted) {
    const { worstLsb, worstV } = trim.result.trim.predicted
    return `No measurement as left is recorded. With these codes the worst error is predicted at ${number(worstLsb, 2)} LSB, ${quantity(worstV, 'V')}; a prediction is no verification.`
  }
  return 'No code is given and no measurement as left is recorded.'
}

function putCodes(sheet: Sheet, facts: CertificateFacts, x: number, top: number): number {
  const { trim } = facts
  const codes = trim?.result.trim.codes ?? null
  if (codes === null) {
    sheet.put('no codes', x, top, { face: 'strong', colour: ink.second })
    return top + 14
  }
  // Codes that nobody has accepted are shown, and stand back.
  const colour = isAccepted(facts) ? ink.text : ink.second
  let at = x
  for (const which of ['gain', 'offset'] as const) {
    const code = codes[which]
    if (code === undefined) continue
    sheet.put(`${which} code`, at, top, { face: 'strong', colour: which === 'gain' ? ink.copper : ink.tide })
    sheet.put(String(code), at, top + 11, { face: 'title', size: 21, colour })
    sheet.put(trim?.result.trim.words?.[which] ?? '', at, top + 38, { face: 'mono' })
    at += Math.max(76, sheet.width(String(code), { face: 'title', size: 21 }) + 24)
  }
  return top + 52
}

const isAccepted = ({ trim, override }: CertificateFacts) =>
  trim?.verdict !== 'suspect' || trim.accepted || override !== null

/** What happened around the records; none of it changes them. */
function warnings(facts: CertificateFacts): string[] {
  const { notices, override, revision, trim } = facts
  const said = notices
    .filter(({ code }) => code !== 'replayed' && code !== 'released-by-author')
    .map(({ message }) => message)
  return [
    ...(revision.releasedByAuthor ? ['The design revision was released by its author.'] : []),
    ...(revision.withdrawnAt === null
      ? []
      : [`The design revision was withdrawn on ${revision.withdrawnAt.slice(0, 10)}.`]),
    ...(trim?.verdict === 'suspect' && override
      ? [
          `The trim was suspect. Its codes were accepted by ${override.by} in record ${whole(override.number)}: “${override.reason}”`,
        ]
      : []),
    ...(isAccepted(facts) ? [] : ['The trim is suspect and nobody has accepted its codes.']),
    ...new Set(said),
  ]
}
