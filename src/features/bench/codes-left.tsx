import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import { wordText } from '../../../shared/solver/coding.ts'
import type { PerAdjuster } from '../../../shared/solver/types.ts'
import { CopyButton } from '../../ui/copy-button.tsx'

const tones = { gain: 'text-copper', offset: 'text-tide' } as const

type CodesLeftProps = {
  codes: PerAdjuster<number>
  trimmers: { gain: Trimmer | null; offset: Trimmer | null }
}

/** Once it is recorded as left: the codes that are loaded and stay. There is nothing to load any more. */
export function CodesLeft({ codes, trimmers }: CodesLeftProps) {
  return (
    <div className="grid grid-cols-2 gap-x-6 gap-y-4 wide:grid-cols-1">
      {(['gain', 'offset'] as const).map((which) => {
        const code = codes[which]
        const trimmer = trimmers[which]
        if (code === undefined || trimmer === null) return null
        return (
          <div key={which} className="min-w-0">
            <h3 className={`text-small font-medium ${tones[which]}`}>{which}</h3>
            <output
              aria-label={`${which} code`}
              className="block text-code-narrow font-medium narrow:text-code print:text-[21pt] print:leading-8"
            >
              {code}
            </output>
            <div className="flex flex-wrap items-baseline gap-x-3">
              <span className="font-mono text-head">{wordText(code, trimmer.bits, trimmer.coding)}</span>
              <CopyButton text={String(code)} what={`${which} code ${code}`} />
            </div>
          </div>
        )
      })}
    </div>
  )
}
