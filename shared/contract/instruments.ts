import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { calendarDay, instant, instrumentId, notNegative, plainText } from './primitives.ts'

/** Accuracy limits as the solver takes them (solver.md section 3): rectangular, u = limit/√3, common to all points. */
const accuracy = {
  gainPpm: notNegative.max(1e6).describe('Limit of the gain, ppm of reading'),
  offsetV: notNegative.max(limits.rangeEndMaxV).describe('Limit of the offset, V'),
}
const described = {
  serial: plainText(limits.serialMax),
  title: plainText(limits.instrumentTitleMax),
  ...accuracy,
  calibratedOn: calendarDay.describe('Day of the last calibration, UTC'),
  dueOn: calendarDay.describe('Last day on which it may be used, UTC'),
}

/** What a record keeps of the instrument that measured: nothing that is changed later reaches back. */
export const instrumentFacts = z.object({ id: instrumentId, ...described }).meta({ id: 'InstrumentFacts' })
export type InstrumentFacts = z.output<typeof instrumentFacts>

export const instrument = instrumentFacts
  .extend({
    createdAt: instant,
    changedAt: instant,
    changedBy: z.string(),
    retiredAt: instant.nullable(),
    etag: z.string().describe('What If-Match takes, quotes included; another one after every change'),
  })
  .meta({ id: 'Instrument' })
export type Instrument = z.output<typeof instrument>

export const instrumentRule = z
  .strictObject({
    overdueAllowed: z
      .boolean()
      .describe('True: an overdue instrument records, and the record says so. False: it is refused'),
  })
  .meta({ id: 'InstrumentRule' })

const dueAfterCalibration = ({ calibratedOn, dueOn }: { calibratedOn?: string; dueOn?: string }) =>
  calibratedOn === undefined || dueOn === undefined || dueOn >= calibratedOn
const dueTrouble = { path: ['dueOn'], message: 'Due lies before the calibration.' }

export const newInstrument = z
  .strictObject({ id: instrumentId, ...described })
  .refine(dueAfterCalibration, dueTrouble)
  .meta({ id: 'NewInstrument' })
/** What was calibrated or read wrong; an id is for ever, because records name it. */
export const instrumentChange = z
  .strictObject({
    serial: described.serial.optional(),
    title: described.title.optional(),
    gainPpm: described.gainPpm.optional(),
    offsetV: described.offsetV.optional(),
    calibratedOn: described.calibratedOn.optional(),
    dueOn: described.dueOn.optional(),
    retired: z.literal(true).optional(),
  })
  .meta({ id: 'InstrumentChange' })
export type InstrumentChange = z.output<typeof instrumentChange>

/** Limits and due dates decide what is recorded, so whoever records does not keep them. */
const keeps = { roles: ['administrator'], scopes: [] } as const

export const listInstruments = endpoint({
  id: 'listInstruments',
  method: 'GET',
  path: '/instruments',
  summary: 'Instruments by id, retired ones last, and whether overdue ones may record',
  access: { roles: everyRole, scopes: ['trims:write', 'trims:read', 'trims:read-all'] },
  reply: {
    status: 200,
    schema: z.object({ items: z.array(instrument), overdueAllowed: z.boolean() }),
  },
  refusals: [],
})

export const postInstrument = endpoint({
  id: 'createInstrument',
  method: 'POST',
  path: '/instruments',
  summary: 'Add an instrument',
  access: keeps,
  body: newInstrument,
  reply: { status: 201, schema: instrument },
  refusals: ['already-exists'],
})

export const patchInstrument = endpoint({
  id: 'changeInstrument',
  method: 'PATCH',
  path: '/instruments/:id',
  summary: 'Change an instrument, or retire it; records keep what was true when they were made',
  access: keeps,
  params: z.strictObject({ id: instrumentId }),
  body: instrumentChange,
  conditional: true,
  reply: { status: 200, schema: instrument },
  refusals: ['not-found', 'instrument-retired'],
})

export const putInstrumentRule = endpoint({
  id: 'setInstrumentRule',
  method: 'PUT',
  path: '/instrument-rule',
  summary: 'Say whether an overdue instrument may record',
  access: keeps,
  body: instrumentRule,
  reply: { status: 200, schema: instrumentRule },
  refusals: [],
})
