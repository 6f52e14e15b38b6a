import { verdictExit } from '../../shared/contract/exit.ts'
import { OgeeError } from '../../shared/errors.ts'
import type { Json } from '../../shared/ledger/canonical.ts'
import { askUnit, noCodesExit, unitDocument } from '../ask-unit.ts'
import type { Client } from '../client.ts'
import { designOfLot } from '../design-of-lot.ts'
import { dryRun } from '../dry-run.ts'
import { completedBody, flagsBody, type RequestBody } from '../request.ts'
import { sendTrim } from '../send-trim.ts'
import type { Spooler } from '../spool/spooler.ts'
import { problemDocument, toTrouble } from '../trouble.ts'
import type { UnitOptions } from '../unit-options.ts'

type Fields = { readonly [name: string]: Json | undefined }
export type Asked = { id: Json; perform: () => Promise<Answered> } | { id: Json; problem: OgeeError }
type Answered = { exit: number } & ({ record: unknown } | { unit: unknown })
export type Answer = { id: Json; exit: number; record?: unknown; unit?: unknown; problem?: unknown }

type World = {
  client: Pick<Client, 'call'>
  spooler: Spooler | null
  options: UnitOptions
  temperatureC: number | undefined
}

/** Reads lines of `ogee pipe` and answers them. A bad line is answered like any other; nothing but the end of the input ends it. */
export class Answerer {
  private readonly world: World
  private readonly designs = new Map<string, Promise<string>>()

  constructor(world: World) {
    this.world = world
  }

  /** As far as it goes without the server, so that the next line is read while this one is under way. */
  read(text: string): Asked {
    let id: Json = null
    try {
      const fields = objectOf(text)
      id = fields.id ?? null
      const { id: _, do: act, ...rest } = fields
      if (act === 'unit') return { id, perform: () => this.unit(rest) }
      if (act === 'trim' || act === 'check') return { id, perform: () => this.measurement(act, rest) }
      const message = `do is trim, check or unit; ${JSON.stringify(act ?? null)} is none of them.`
      throw new OgeeError('invalid-request', message, { errors: [{ path: '/do', message }] })
    } catch (error) {
      return { id, problem: toTrouble(error) }
    }
  }

  async answer(asked: Asked): Promise<Answer> {
    const { id } = asked
    if ('problem' in asked) return problemAnswer(id, asked.problem)
    try {
      return { id, ...(await asked.perform()) }
    } catch (error) {
      return problemAnswer(id, toTrouble(error))
    }
  }

  private async measurement(act: 'trim' | 'check', { key, ...line }: Fields): Promise<Answered> {
    const { client, spooler, options } = this.world
    const body = await this.bodyOf(act, line)
    if (key !== undefined && (typeof key !== 'string' || !/^[\x21-\x7e]{1,128}$/.test(key)))
      throw new OgeeError('invalid-request', 'key takes 1 to 128 visible ASCII characters without spaces.', {
        errors: [{ path: '/key', message: 'Visible ASCII without spaces.' }],
      })
    const record = options.dryRun ? await dryRun(client, body) : await sendTrim(spooler ?? client, body, key)
    return { exit: record.verdict === null ? 0 : verdictExit[record.verdict], record }
  }

  private async bodyOf(act: 'trim' | 'check', line: Fields): Promise<RequestBody> {
    const { options, temperatureC } = this.world
    const design = options.design ?? (line.design === undefined ? await this.designOf(line.lot) : undefined)
    const { effects, ...others } = options
    const flags = act === 'trim' ? options : { ...others, effects: undefined }
    return completedBody(line, flagsBody(flags, design, temperatureC, act === 'trim' ? 'trim' : 'verify'))
  }

  /** A lot's design does not change, so it is asked for once. */
  private async designOf(named: Json | undefined): Promise<string | undefined> {
    const lot = named ?? this.world.options.lot
    if (typeof lot !== 'string') return undefined
    const asked = this.designs.get(lot) ?? designOfLot(this.world.client, lot)
    this.designs.set(lot, asked)
    return await asked.catch((error: unknown) => {
      this.designs.delete(lot)
      throw error
    })
  }

  private async unit(fields: Fields): Promise<Answered> {
    const { client, options } = this.world
    const text = (name: 'unit' | 'design' | 'channel' | 'range') => {
      const value = fields[name] ?? options[name]
      if (value === undefined || typeof value === 'string') return value
      throw new OgeeError('invalid-request', `${name} is a text.`, {
        errors: [{ path: `/${name}`, message: 'Give a text.' }],
      })
    }
    const serial = text('unit')
    if (serial === undefined) throw new OgeeError('invalid-request', 'Name the unit in the field unit.')
    const asked = { serial, design: text('design'), channel: text('channel'), range: text('range') }
    const { unit, current, isGood } = await askUnit(client, asked)
    return { exit: isGood ? 0 : noCodesExit, unit: unitDocument(unit, current) }
  }
}

function objectOf(text: string): Fields {
  let value: Json
  try {
    value = JSON.parse(text) as Json
  } catch {
    throw new OgeeError('malformed-json', 'The line is not JSON.')
  }
  if (typeof value === 'object' && value !== null && !Array.isArray(value)) return value as Fields
  throw new OgeeError('invalid-request', 'The line is not a JSON object.')
}

const problemAnswer = (id: Json, trouble: OgeeError): Answer => ({
  id,
  exit: trouble.exit,
  problem: problemDocument(trouble),
})
