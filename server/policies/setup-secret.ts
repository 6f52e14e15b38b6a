import { randomBytes, timingSafeEqual } from 'node:crypto'
import { sha256 } from '../ledger/crypto.ts'

/** The one-time secret with which the first administrator signs up. It lives in memory and dies with the process. */
export type SetupSecret = { text: string; matches: (candidate: string) => boolean }

/** 192 random bits. Set-up closes for good when the first person exists, so that the secret works once. */
export function newSetupSecret(): SetupSecret {
  const text = randomBytes(24).toString('base64url')
  const expected = sha256(Buffer.from(text))
  return { text, matches: (candidate) => timingSafeEqual(sha256(Buffer.from(candidate)), expected) }
}
