import { verify } from 'node:crypto'
import type { SignatureTask } from '../../shared/ledger/check/signed-in-receipt.ts'
import { publicKeyOf } from './crypto.ts'

/** Signatures take longest of all that is checked: Node's threads share them, so that other work goes on. */
export function verifyAll(tasks: readonly SignatureTask[]): Promise<boolean[]> {
  return Promise.all(
    tasks.map(
      ({ publicKey, bytes, signature }) =>
        new Promise<boolean>((resolve, reject) => {
          verify(null, bytes, publicKeyOf(publicKey), signature, (error, isGood) =>
            error ? reject(error) : resolve(isGood),
          )
        }),
    ),
  )
}
