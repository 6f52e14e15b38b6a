import fc from 'fast-check'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { runSeed } from '../support/random.ts'
import { type Calls, createBy, type Reply, revisionCalls, titled } from '../support/revision-calls.ts'
import { signIn } from '../support/server-client.ts'
import { addPerson, addToken, type Harness, serverHarness } from '../support/server-harness.ts'

/** What a revision must be like after any sequence of acts; written from the rules, not from the code. */
type Revision = {
  state: 'draft' | 'in-review' | 'released' | 'withdrawn'
  writers: Set<number>
  title: string
}
type Model = { revisions: Revision[]; titles: number }
type Real = { key: string; etags: string[] }
type Step = fc.AsyncCommand<Model, Real>

let harness: Harness
let calls: Calls
/** Two engineers, an operator, and a script. */
let callers: ({ cookie: string } | { token: string })[]

beforeAll(async () => {
  harness = await serverHarness()
  calls = revisionCalls(harness.url)
  callers = []
  for (const [role, email] of [
    ['engineer', 'a@example.org'],
    ['engineer', 'b@example.org'],
    ['operator', 'o@example.org'],
  ] as const) {
    await addPerson(harness, role, email)
    callers.push({ cookie: await signIn(harness.url, email) })
  }
  callers.push(await addToken(harness, ['designs:write', 'designs:read']))
})
afterAll(() => harness.close())

const isEngineer = (who: number) => who < 2
const writes = (who: number) => who !== 2

class Act implements Step {
  readonly name: string
  readonly run: (model: Model, real: Real) => Promise<void>
  readonly check = () => true
  constructor(name: string, run: Step['run']) {
    this.name = name
    this.run = run
  }
  toString = () => this.name
}

/** An act on one revision: refused for who asks, for how it stands, for an old etag, in that order, or done. */
function act(
  name: string,
  who: number,
  pick: number,
  fresh: boolean,
  rule: {
    may: boolean
    from: Revision['state']
    own?: boolean
    send: (key: string, number: number, etag: string, title: string) => Promise<Reply>
    effect: (revision: Revision, title: string) => void
  },
): Act {
  return new Act(`${name} by ${who} of ${pick}${fresh ? '' : ' with an old etag'}`, async (model, real) => {
    const at = pick % model.revisions.length
    const revision = model.revisions[at]!
    const title = `t${++model.titles}`
    const reply = await rule.send(real.key, at + 1, fresh ? real.etags[at]! : '"0.0"', title)
    const expected = !rule.may
      ? 403
      : revision.state !== rule.from
        ? 409
        : rule.own && revision.writers.has(who)
          ? 403
          : fresh
            ? 200
            : 412
    expect(reply.status, JSON.stringify(reply.body).slice(0, 200)).toBe(expected)
    if (expected !== 200) return
    rule.effect(revision, title)
    real.etags[at] = reply.etag!
  })
}

const start = (who: number) =>
  new Act(`start by ${who}`, async (model, real) => {
    const title = `t${++model.titles}`
    const reply = await calls.start(callers[who]!, real.key, { document: titled(title) })
    expect(reply.status).toBe(writes(who) ? 201 : 403)
    if (!writes(who)) return
    model.revisions.push({ state: 'draft', writers: new Set([who]), title })
    real.etags.push(reply.etag!)
  })

const save = (who: number, pick: number, fresh: boolean) =>
  act('save', who, pick, fresh, {
    may: writes(who),
    from: 'draft',
    send: (key, number, etag, title) => calls.save(callers[who]!, key, number, etag, titled(title)),
    effect: (revision, title) => {
      revision.title = title
      revision.writers.add(who)
    },
  })
const submit = (who: number, pick: number, fresh: boolean) =>
  act('submit', who, pick, fresh, {
    may: writes(who),
    from: 'draft',
    send: (key, number, etag) => calls.submit(callers[who]!, key, number, etag),
    effect: (revision) => {
      revision.state = 'in-review'
    },
  })
const giveBack = (who: number, pick: number, fresh: boolean) =>
  act('return', who, pick, fresh, {
    may: isEngineer(who),
    from: 'in-review',
    send: (key, number, etag) => calls.giveBack(callers[who]!, key, number, etag),
    effect: (revision) => {
      revision.state = 'draft'
    },
  })
const release = (who: number, pick: number, fresh: boolean) =>
  act('release', who, pick, fresh, {
    may: isEngineer(who),
    from: 'in-review',
    own: true,
    send: (key, number, etag) => calls.release(callers[who]!, key, number, etag),
    effect: (revision) => {
      revision.state = 'released'
    },
  })
const withdraw = (who: number, pick: number, fresh: boolean) =>
  act('withdraw', who, pick, fresh, {
    may: isEngineer(who),
    from: 'released',
    send: (key, number, etag) => calls.withdraw(callers[who]!, key, number, etag),
    effect: (revision) => {
      revision.state = 'withdrawn'
    },
  })

/** After everything: what is stored is what the rules say, and the ledger has a leaf for each release and withdrawal. */
async function verify({ revisions }: Model, { key, etags }: Real): Promise<void> {
  const { body } = await calls.send('get', key, callers[0]!, null)
  const stored = body.revisions as { state: string; title: string; etag: string }[]
  expect(stored.map(({ state, title, etag }) => ({ state, title, etag }))).toEqual(
    revisions.map(({ state, title }, i) => ({ state, title, etag: etags[i] })),
  )
  const leaves = await harness.database.sql.rows<{ kind: string; body: Buffer }>(
    "SELECT kind, body FROM ledger_leaves WHERE kind IN ('release', 'withdrawal')",
  )
  const left = leaves
    .map((leaf) => ({
      kind: leaf.kind,
      ...(JSON.parse(leaf.body.toString('utf8')) as { design: string; revision: number }),
    }))
    .filter(({ design }) => design === key)
    .map(({ kind, revision }) => `${kind} ${revision}`)
  const due = revisions.flatMap(({ state }, i) => [
    ...(state === 'released' || state === 'withdrawn' ? [`release ${i + 1}`] : []),
    ...(state === 'withdrawn' ? [`withdrawal ${i + 1}`] : []),
  ])
  expect(left.sort()).toEqual(due.sort())
}

describe('ASVS V2.3.1 the states of revisions', () => {
  const seed = runSeed()

  it(`follow the rules through any sequence of acts (seed ${seed})`, async () => {
    const who = fc.nat(3)
    // Engineers act more often, so that sequences get past the first state.
    const engineer = fc.nat(1)
    const pick = fc.nat(3)
    const fresh = fc.integer({ min: 0, max: 4 }).map((n) => n > 0)
    const steps = [
      fc.oneof(engineer, who).map(start),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => save(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => submit(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => submit(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => giveBack(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => release(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => release(...of)),
      fc.tuple(fc.oneof(engineer, who), pick, fresh).map((of) => withdraw(...of)),
    ]
    let designs = 0
    const reached = new Set<string>()
    await fc.assert(
      fc.asyncProperty(fc.commands(steps, { maxCommands: 40, size: '+1' }), async (commands) => {
        const key = `M-${++designs}`
        const { etag, title } = await createBy(harness.url, callers[0]!, key, titled('t0'))
        const model: Model = { revisions: [{ state: 'draft', writers: new Set([0]), title }], titles: 0 }
        const real: Real = { key, etags: [etag] }
        await fc.asyncModelRun(() => ({ model, real }), commands)
        for (const { state } of model.revisions) reached.add(state)
        await verify(model, real)
      }),
      { numRuns: 30, seed, endOnFailure: true },
    )
    expect(reached).toEqual(new Set(['draft', 'in-review', 'released', 'withdrawn']))
  }, 300_000)
})
