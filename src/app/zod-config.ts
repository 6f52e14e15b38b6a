import * as z from 'zod'

// Before any schema is made: zod would otherwise try `new Function`, which the content security policy forbids.
z.config({ jitless: true })
