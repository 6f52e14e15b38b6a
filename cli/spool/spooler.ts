import { getRevision } from '../../shared/contract/designs.ts'
import { listInstruments } from '../../shared/contract/instruments.ts'
import { getLedgerKey } from '../../shared/contract/ledger.ts'
import type { Record as StoredRecord } from '../../shared/contract/record.ts'
import { postTrim } from '../../shared/contract/trims.ts'
import { isOgeeError, OgeeError } from '../../shared/errors.ts'
import { SOLVER_VERSION } from '../../shared/solver/version.ts'
import { dryRun, revisionAsked } from '../dry-run.ts'
import type { Io } from '../io.ts'
import type { AnyRecord, SpooledRecord } from '../record-rendering.ts'
import { defaultKey, type RequestBody } from '../request.ts'
import type { Spool } from './folder.ts'
import { pinKey, pinnedKey } from './pinned-key.ts'
import { sendPending } from './send-pending.ts'
import { isOutage, type SpoolClient } from './spool-client.ts'

/** How long a measurement waits for older ones to be sent before it goes behind them into the spool. */
const backlogMs = 5_000
const instrumentsStaleMs = 3_600_000

type Computed = Omit<SpooledRecord, 'spooled'>

/** What codes belong to; a verification loads none, so it stands beside. */
const whatOf = ({ kind, design, unit, channel, range }: Computed) =>
  JSON.stringify([kind, design, unit, channel, range])

/**
 * Records a measurement, or, while the server is away, computes its codes here and puts it down to be sent later.
 * Guarantee: what it gives back is recorded or on disk; in both cases under the key that makes a repeat harmless.
 */
export class Spooler {
  readonly client: SpoolClient
  readonly spool: Spool
  readonly #io: Io
  /** Once the server was away, a long-lived process asks it again only now and then. */
  #awayUntil = 0
  #turn: Promise<unknown> = Promise.resolve()

  constructor(client: SpoolClient, spool: Spool, io: Io) {
    this.client = client
    this.spool = spool
    this.#io = io
  }

  async record(body: RequestBody, given: string | undefined): Promise<AnyRecord> {
    const key = given ?? (await defaultKey(body))
    if (!(await this.mayGoAhead())) return await this.put(body, key)
    try {
      const record = await this.client.call(postTrim, { body, idempotencyKey: key })
      await this.remember(record, body)
      return record
    } catch (error) {
      if (!isOutage(error)) throw error
      this.noteAway()
      return await this.put(body, key)
    }
  }

  noteAway(): void {
    this.#awayUntil = performance.now() + 2_000
  }

  /** True when everything older was sent and the server was not away a moment ago: then order is kept. */
  async mayGoAhead(): Promise<boolean> {
    // One at a time: blocks of a batch ask side by side.
    const turn = this.#turn.then(() => this.#sendOlder())
    this.#turn = turn.catch(() => undefined)
    return await turn
  }

  async #sendOlder(): Promise<boolean> {
    if (performance.now() < this.#awayUntil) return false
    if (this.spool.names('pending').length === 0) return true
    const until = performance.now() + backlogMs
    const refused: string[] = []
    const sending = await this.spool.alone(() =>
      sendPending(
        this.spool,
        this.client,
        (line) => void (line.problem && refused.push(line.unit)),
        () => performance.now() < until,
      ),
    )
    for (const unit of refused) {
      this.#io.say(`ogee: the server did not take unit ${unit}; see ${this.spool.dir}/refused.`)
    }
    if (sending?.stopped && !isOutage(sending.stopped)) throw sending.stopped
    if (sending?.stopped) this.noteAway()
    return this.spool.names('pending').length === 0
  }

  /**
   * Computes with what is kept here, and puts the measurement down; the same one again is the one that is there. Of many
   * (`isLast` false) none is saved before `spool.sync` has returned.
   */
  async put(body: RequestBody, key: string, isLast = true): Promise<SpooledRecord> {
    const known = this.spool.withKey(key)
    if (known) return { ...(known.entry.printed as unknown as Computed), spooled: known.path }
    const computed = await this.#compute(body)
    const at = new Date(this.#io.now()).toISOString()
    const codes = computed.result.format === 'ogee.codes/1' ? computed.result.trim.codes : null
    const claimed = { solver: SOLVER_VERSION, codes, at }
    const entry = { format: 'ogee.spooled/1', key, savedAt: at, body: { ...body, claimed } } as const
    const file = this.spool.add({ ...entry, printed: computed }, whatOf(computed), isLast)
    return { ...computed, spooled: file }
  }

  async #compute(body: RequestBody): Promise<Computed> {
    const { follows, ...rest } = body
    // Which record is the last only the server knows: that is no fault of the unit.
    if (body.effects === 'learned' && follows === 'last') {
      const why =
        'The server does not answer, and a pass whose effects are learned needs the record before it.'
      throw new OgeeError('server-unreachable', why)
    }
    // Codes do not depend on the record that is followed unless effects are learned from it.
    const dry = await dryRun(this.client.offline, body.effects === 'learned' ? body : rest)
    const { dryRun: _, ...record } = dry
    const computed = { ...record, pass: follows === undefined ? record.pass : null, follows: follows ?? null }
    if (body.applied === undefined && record.kind === 'trim') this.#sayNeutral(computed)
    return computed
  }

  /** Codes that this spool gave out are loaded for all we know: not said, they would be corrected twice. */
  #sayNeutral(computed: Computed): void {
    const { unit } = computed
    if (this.spool.hasOf(whatOf(computed))) {
      throw new OgeeError(
        'applied-required',
        `Unit ${unit} got codes from this spool. Say with --applied which were loaded while measuring, or neutral.`,
      )
    }
    this.#io.say(
      `ogee: unit ${unit}: neutral was assumed, since the server cannot be asked which codes are loaded.`,
    )
  }

  /** Keeps what is needed to go on without the server; asks for it only when it is not there or not the same. */
  async remember(record: StoredRecord, body: RequestBody): Promise<void> {
    const { client, spool } = this
    try {
      const number = await revisionAsked(client, body)
      const asked = { params: { key: body.design, number } }
      if (client.cache.read(getRevision, asked)?.reply.hash !== record.designHash) {
        await client.call(getRevision, asked)
      }
      const instruments = client.cache.read(listInstruments, {})
      if (
        body.conditions?.instrument !== undefined &&
        (instruments?.ageMs ?? Infinity) > instrumentsStaleMs
      ) {
        await client.call(listInstruments, {})
      }
      if (pinnedKey(spool) === null) pinKey(spool, await client.call(getLedgerKey, {}))
    } catch (error) {
      if (!isOgeeError(error)) throw error
      // It is recorded; that it may not go on without the server is said and is no trouble of this measurement.
      this.#io.say(`ogee: what --spool needs without the server could not be kept: ${error.message}`)
    }
  }
}
