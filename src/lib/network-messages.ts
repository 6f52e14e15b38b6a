import type { NetworkRequest, NetworkResult } from '../../shared/solver/network-synthesis/request.ts'
import type { Adjuster, PerAdjuster, Which } from '../../shared/solver/types.ts'

/** One question to a worker that looks for resistors, and its one answer. */
export type ToNetworkWorker = {
  design: { adjusters: PerAdjuster<Adjuster> }
  which: Which
  request: NetworkRequest
}

/** `refusal`: the request makes no sense; the sentence names the place and the remedy. */
export type FromNetworkWorker = { result: NetworkResult } | { refusal: string }
