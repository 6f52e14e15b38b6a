import { useQuery } from '@tanstack/react-query'
import type { Finding } from '../../../shared/contract/findings.ts'
import type { Role } from '../../../shared/contract/primitives.ts'
import { Button } from '../../ui/button.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { type About, findingsOptions } from './queries.ts'

type Act = (finding: Finding, act: 'answer' | 'close') => void

/** What was found, with the answers. Acts that are not open to somebody are absent. */
export function Findings({ about, role, onAct }: { about: About; role: Role; onAct: Act }) {
  const findings = useQuery(findingsOptions(about))
  const items = findings.data?.items ?? []
  const open = items.filter(({ state }) => state !== 'closed').length
  return (
    <Section title="Findings" side={items.length > 0 ? `${open} open` : undefined}>
      {findings.error ? <Problem error={findings.error} /> : null}
      {findings.isPending ? <Loading>Reading the findings.</Loading> : null}
      {findings.data && items.length === 0 ? <p className="text-ink-2">None.</p> : null}
      <ol className="space-y-3">
        {items.map((finding) => (
          <li key={finding.id}>
            <Entry
              at={finding.at}
              by={finding.by.name}
              text={finding.text}
              note={`${subjectWords(finding, about)}${stateWords[finding.state]}`}
            />
            {finding.answers.map(({ id, act, at, by, text }) => (
              <Entry
                key={id}
                at={at}
                by={by.name}
                text={text}
                note={act === 'close' ? 'Closed.' : 'Answer.'}
              />
            ))}
            <Acts finding={finding} role={role} onAct={onAct} />
          </li>
        ))}
      </ol>
    </Section>
  )
}

const stateWords = { open: 'Open.', answered: 'Answered, open.', closed: '' } as const
/** Said where it is not what the page is about. */
function subjectWords({ subject }: Finding, about: About): string {
  if (subject.kind === 'lot') return 'lot' in about ? '' : `On lot ${subject.lot}. `
  return 'record' in about ? '' : `On record ${subject.number}, unit ${subject.unit}. `
}

function Entry({ at, by, text, note }: { at: string; by: string; text: string; note: string }) {
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-0.5 border-t border-hair py-1 narrow:grid-cols-[9rem_1fr]">
      <p className="text-small text-ink-2">
        <TimeText at={at} />
        <br />
        {by}
      </p>
      <p className="max-w-[60rem] text-text whitespace-pre-wrap [overflow-wrap:anywhere]">
        {text} <span className="text-ink-2">{note}</span>
      </p>
    </div>
  )
}

function Acts({ finding, role, onAct }: { finding: Finding; role: Role; onAct: Act }) {
  if (finding.state === 'closed') return null
  if (role === 'engineer') {
    return (
      <Button look="quiet" onClick={() => onAct(finding, 'answer')}>
        Answer
      </Button>
    )
  }
  if (role !== 'auditor') return null
  return (
    <Button look="quiet" onClick={() => onAct(finding, 'close')}>
      Close
    </Button>
  )
}
