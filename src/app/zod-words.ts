import * as z from 'zod'
import { issueWords } from '../../shared/contract/issue-words.ts'

// With the frame and not with sign-in, whose form has sentences of its own: its first load is counted in bytes.
z.config({ customError: issueWords })
