import * as z from 'zod'
import { issueWords } from '../../shared/contract/issue-words.ts'

// Before any schema is made: zod would otherwise try `new Function`, which the content security policy forbids.
z.config({ jitless: true, customError: issueWords })
