import { hash, verify } from '@node-rs/argon2'
import { OgeeError } from '../../shared/errors.ts'

/** OWASP's recommendation with room: argon2id (the library's default kind), 64 MiB, three passes, one lane (S7). */
const parameters = { memoryCost: 65_536, timeCost: 3, parallelism: 1 }
/** Each takes 64 MiB and a thread; more at once would starve everything else. */
const atOnce = 4

/** Who comes when so many wait would wait for most of a minute. */
const waitingMax = 100

let running = 0
const waiting: (() => void)[] = []

async function inTurn<T>(work: () => Promise<T>): Promise<T> {
  if (waiting.length >= waitingMax) {
    throw new OgeeError('too-many-requests', 'Too many people sign in at this moment. Try again in 10 s.', {
      facts: { retryAfterSeconds: 10 },
    })
  }
  if (running >= atOnce) await new Promise<void>((resolve) => waiting.push(resolve))
  else running++
  try {
    return await work()
  } finally {
    // The place goes straight to the next in line, so that `running` never passes the limit.
    const next = waiting.shift()
    if (next) next()
    else running--
  }
}

/** The password exactly as typed: no trimming, folding or cutting (ASVS V6.2.8). */
export const hashPassword = (password: string): Promise<string> => inTurn(() => hash(password, parameters))

let dummy: Promise<string> | undefined

/** Whether the password is right. Without a stored hash it takes the same time and is wrong. */
export async function checkPassword(stored: string | null, password: string): Promise<boolean> {
  dummy ??= hashPassword('nobody has this password')
  const against = stored ?? (await dummy)
  const right = await inTurn(() => verify(against, password))
  return stored !== null && right
}
