import * as z from 'zod'

/**
 * Evaluated before any schema is made. A run of the command line reads a document or two: compiling parsers for them would
 * take longer than reading them.
 */
z.config({ jitless: true })
