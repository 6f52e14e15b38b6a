import * as z from 'zod'
import { limits } from '../limits.ts'
import { code, finite, instant } from './primitives.ts'

/** One measured point as a client sends it: plain numbers, volts and degrees Celsius. */
export const point = z
  .strictObject({
    code: code.optional(),
    word: z
      .string()
      .regex(/^0[xX][0-9A-Fa-f]{1,6}$/, 'Write the word in hexadecimal, such as 0x8A1F.')
      .optional(),
    target: finite.optional().describe('Wanted output, V; quantised to the nearest code'),
    measured: finite.optional().describe('Measured output, V'),
    readings: z
      .array(finite)
      .min(1)
      .max(limits.readingsMax)
      .optional()
      .describe('Readings whose mean is the output, V'),
    uncertainty: finite
      .optional()
      .describe('Standard uncertainty (k = 1) of the measured output, random part, V'),
    readAt: instant.optional(),
    temperatureC: z.number().min(-273.15).max(1000).optional(),
  })
  .refine((p) => p.code !== undefined || p.word !== undefined || p.target !== undefined, {
    message: 'Give code, word or target.',
    path: ['code'],
  })
  .refine((p) => (p.measured === undefined) !== (p.readings === undefined), {
    message: 'Give either measured or readings.',
    path: ['measured'],
  })
  .meta({ id: 'Point' })
export type Point = z.output<typeof point>

export const points = z.array(point).min(1).max(limits.pointsMax)
