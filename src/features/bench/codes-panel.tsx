import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import type { Applied, TrimResult, Which } from '../../../shared/solver/types.ts'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { copyText } from '../../ui/clipboard.ts'
import { CopyButton } from '../../ui/copy-button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { VerdictShape } from '../../ui/verdict-shape.tsx'
import { ReachBar } from './reach-bar.tsx'

export const copyKeys = { gain: 'G', offset: 'O' } as const
const tones = { gain: 'text-copper', offset: 'text-tide' } as const

type CodesPanelProps = {
  trim: TrimResult
  trimmers: { gain: Trimmer | null; offset: Trimmer | null }
  applied: Applied
  /** What the applied codes are: "pass 1", or null for neutral. */
  appliedFrom: string | null
  isStale: boolean
}

/** The caution stands before the codes, always: copying is the step before loading. */
export function LoadCaution() {
  return (
    <div className="mb-2">
      <Caution>Loading codes moves a live output. Make safe what it drives first.</Caution>
    </div>
  )
}

/** The largest things on the page: the codes, decimal and hex, with the share of the reach that they use. */
export function CodesPanel(props: CodesPanelProps) {
  const present = (['gain', 'offset'] as const).filter((which) => props.trimmers[which] !== null)
  const { trim, isStale } = props
  return (
    <>
      {trim.codes ? <LoadCaution /> : null}
      <div className={`grid grid-cols-2 gap-x-6 gap-y-4 wide:grid-cols-1 ${isStale ? 'text-ink-3' : ''}`}>
        {present.map((which) => (
          <Code key={which} which={which} {...props} />
        ))}
      </div>
      {trim.verdict === 'suspect' && (
        <p className="mt-3 text-small text-ink-2">
          Marked, not hidden. They can be recorded only with a reason.
        </p>
      )}
    </>
  )
}

function Code({ which, trim, trimmers, applied, appliedFrom, isStale }: CodesPanelProps & { which: Which }) {
  const code = trim.codes?.[which]
  const word = trim.words?.[which]
  const trimmer = trimmers[which]
  const before = applied === 'neutral' ? undefined : applied[which]
  const isSuspect = trim.reasons.includes('suspect')
  return (
    <div className="min-w-0">
      <div className="flex items-baseline justify-between gap-2 text-small">
        <h3 className={`font-medium ${isStale ? '' : tones[which]}`}>{which}</h3>
        {code !== undefined && isSuspect ? (
          <Verdict verdict="suspect" />
        ) : before !== undefined && appliedFrom ? (
          <span className="text-ink-2">
            {appliedFrom}: {before}
          </span>
        ) : null}
      </div>
      {code === undefined || word === undefined ? (
        <NoCode which={which} trim={trim} />
      ) : (
        <>
          <output
            aria-label={`${which} code`}
            className={`block text-code-narrow font-medium narrow:text-code print:text-[21pt] print:leading-8 ${isStale ? '' : isSuspect ? 'text-ink-2' : 'text-ink'}`}
          >
            {code}
          </output>
          <div className="flex flex-wrap items-baseline gap-x-3">
            <span className="font-mono text-head">{word}</span>
            {isStale ? null : (
              <>
                <span className="whitespace-nowrap">
                  <CopyButton text={String(code)} what={`${which} code ${code}`} />
                  <KeyHint keys={copyKeys[which]} />
                </span>
                <Button
                  look="quiet"
                  aria-label={`copy hex of the ${which} code, ${word}`}
                  onClick={() => void copyText(word, `Copied ${word}.`)}
                >
                  copy hex
                </Button>
              </>
            )}
          </div>
          {trimmer && trim.nodeV?.[which] !== undefined && (
            <ReachBar trimmer={trimmer} nodeV={trim.nodeV[which]} used={trim.reachUsed[which] ?? null} />
          )}
        </>
      )}
    </div>
  )
}

function NoCode({ which, trim }: { which: Which; trim: TrimResult }) {
  if (trim.shortfall?.[which] === undefined) {
    const other = which === 'gain' ? 'offset' : 'gain'
    return <p className="text-title text-ink-2">withheld until {other} is in reach</p>
  }
  return (
    <>
      <p className="flex items-center gap-2 text-title font-semibold text-bad">
        <VerdictShape shape="pressed-triangle" />
        out of reach
      </p>
      <p className="mt-1 text-body">No code is given. A clipped code is not a trim.</p>
    </>
  )
}

/** The three steps before there are codes, each with what is missing. */
export function CodesMissing({ children }: { children: string }) {
  return <p className="text-body text-ink-2">{children}</p>
}
