import type { Deps } from '../http/deps.ts'

export async function loadDemo(_deps: Deps, _dataDir: string, _say: (line: string) => void): Promise<void> {}
