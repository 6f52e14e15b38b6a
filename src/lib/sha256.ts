import { sha256 as hash } from '@noble/hashes/sha2.js'
import type { Sha256 } from '../../shared/ledger/hash.ts'

/**
 * SHA-256 in the browser, at once: the platform's own only answers later, and the ledger's checks are pure functions that want the
 * hash where they stand.
 */
export const sha256: Sha256 = (bytes) => hash(bytes)
