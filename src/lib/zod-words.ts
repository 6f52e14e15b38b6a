import * as z from 'zod'
import { issueWords } from '../../shared/contract/issue-words.ts'

// With the pages whose forms speak in a schema's sentences, and not with sign-in: its first load is counted in bytes.
z.config({ customError: issueWords })
