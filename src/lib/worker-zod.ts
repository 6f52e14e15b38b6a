import * as z from 'zod'

// As in the page: zod would otherwise try `new Function`, which the content security policy forbids in workers too.
z.config({ jitless: true })
