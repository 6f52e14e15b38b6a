import { execFileSync } from 'node:child_process'
import { mkdtempSync, rmSync, statfsSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

/** A disk of its own that can be filled: a tmpfs, which only root may mount. */
export type SmallDisk = {
  path: string
  /** Leaves so many bytes free. */
  fill: (leaveBytes: number) => void
  free: () => void
  remove: () => void
}

/** Null where it cannot be mounted, with the reason. */
export function smallDisk(megabytes: number): SmallDisk | { why: string } {
  const path = mkdtempSync(join(tmpdir(), 'ogee-disk-'))
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', `size=${megabytes}m,mode=0777`, 'tmpfs', path], {
      stdio: 'pipe',
    })
  } catch (error) {
    rmSync(path, { recursive: true, force: true })
    return { why: `no disk of our own can be mounted here: ${String(error).split('\n')[0]}` }
  }
  const ballast = join(path, 'ballast')
  return {
    path,
    fill: (leaveBytes) => {
      const { bavail, bsize } = statfsSync(path)
      writeFileSync(ballast, Buffer.alloc(Math.max(0, Number(bavail) * Number(bsize) - leaveBytes)))
    },
    free: () => rmSync(ballast, { force: true }),
    remove: () => {
      execFileSync('umount', ['-l', path], { stdio: 'pipe' })
      rmSync(path, { recursive: true, force: true })
    },
  }
}
