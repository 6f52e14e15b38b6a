import type { Design } from '../../../shared/contract/design.ts'
import { Table, Td } from '../../ui/table.tsx'
import { effectFacts, effectKind, networkFacts, nodeFacts, percent, sourceFacts } from './words.ts'

type Adjuster = NonNullable<Design['adjusters']['gain']>
const heads = { gain: 'text-copper', offset: 'text-tide' } as const

function factsOf(adjuster: Adjuster): [string, string][] {
  return [
    ['effect', effectKind(adjuster.effect)],
    ...effectFacts(adjuster.effect),
    ['known to', percent(adjuster.effectTolerance)],
    ...nodeFacts(adjuster.node),
    ...networkFacts(adjuster.network),
    ...sourceFacts(adjuster.source),
  ]
}

/** Gain and offset side by side on one set of labels, because they are the same questions. */
export function AdjusterTable({ adjusters }: { adjusters: Design['adjusters'] }) {
  const columns = (['gain', 'offset'] as const).flatMap((which) => {
    const adjuster = adjusters[which]
    return adjuster ? [{ which, facts: new Map(factsOf(adjuster)) }] : []
  })
  const names = [...new Set(columns.flatMap((column) => [...column.facts.keys()]))].sort(
    (a, b) => order(a) - order(b),
  )
  if (columns.length === 0) return <p>This design has no adjuster.</p>
  return (
    <>
      <Table caption="Adjusters" className="max-w-[36rem]">
        <thead>
          <tr>
            <th scope="col" className="w-32 border-b border-rule">
              <span className="sr-only">field</span>
            </th>
            {columns.map(({ which }) => (
              <th
                key={which}
                scope="col"
                className={`border-b border-rule px-1.5 text-left font-medium ${heads[which]}`}
              >
                {which}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {names.map((name) => (
            <tr key={name}>
              <th scope="row" className="h-6 border-b border-hair px-1.5 text-left font-normal text-ink-2">
                {name}
              </th>
              {columns.map(({ which, facts }) => (
                <Td key={which} className={facts.get(name) === 'not stated' ? 'text-ink-3' : ''}>
                  {facts.get(name) ?? <span className="text-ink-3">none</span>}
                </Td>
              ))}
            </tr>
          ))}
        </tbody>
      </Table>
      {columns.length === 1 ? (
        <p className="mt-1.5 text-ink-2">
          This design has no {columns[0]?.which === 'gain' ? 'offset' : 'gain'} adjuster.
        </p>
      ) : null}
    </>
  )
}

/** The order of the signal path; what the two adjusters do not share keeps its place among its kind. */
const fields = [
  'effect',
  'slope',
  'offset per volt',
  'R input',
  'R feedback',
  'R adjust',
  'reference',
  'sign',
  'pivot',
  'known to',
  'node nominal',
  'node limits',
  'node input',
  'node return',
  'network',
  'R top',
  'R shift',
  'shift to',
  'R bottom',
  'auxiliary DAC',
  'span',
  'span tolerance',
  'INL',
  'drift',
]
function order(name: string): number {
  return fields.indexOf(name)
}
