import { findNetwork } from './find-network.ts'
import type { ToNetworkWorker } from './network-messages.ts'

/** Three resistors out of a fine series take longer than a page may stand still. */
addEventListener('message', ({ data }: MessageEvent<ToNetworkWorker>) => postMessage(findNetwork(data)))
