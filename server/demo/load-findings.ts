import { answerFinding } from '../commands/findings/answer-finding.ts'
import { writeFinding } from '../commands/findings/write-finding.ts'
import type { Deps } from '../http/deps.ts'
import { demoLots } from './scenario.ts'

type DemoDeps = Pick<Deps, 'database' | 'now' | 'notifyLedger'>

const dayMs = 86_400_000

/** What the auditor found on the lot with the wrong resistor, and what the engineer answered: still open. By fixed keys, so once. */
export async function loadFindings(deps: DemoDeps, end: Date): Promise<void> {
  const lot = demoLots(end).find((one) => one.wrongResistor)
  const [auditor, engineer] = await Promise.all([personOf(deps, 'auditor'), personOf(deps, 'engineer')])
  if (!lot || !auditor || !engineer) return
  const after = (days: number) => ({ ...deps, now: () => new Date(lot.startedAt.getTime() + days * dayMs) })
  const finding = await writeFinding(after(3), {
    subject: { kind: 'lot', design: lot.design, lot: lot.key },
    text: 'Every unit of this lot is out of reach of the gain adjuster. Nothing says what became of them.',
    by: auditor,
    key: 'demo-finding',
  })
  await answerFinding(after(5), {
    finding: finding.id,
    act: 'answer',
    text: 'A divider resistor was fitted with the wrong value. The units are held for rework and are not delivered.',
    by: engineer,
    key: 'demo-answer',
  })
}

async function personOf({ database }: DemoDeps, role: 'auditor' | 'engineer') {
  const found = (await database.models.people.findOne({ where: { role } }))?.get()
  return found ? { id: found.id, name: found.name } : null
}
