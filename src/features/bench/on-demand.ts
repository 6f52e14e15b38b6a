/** What a page of Bench needs only once a block is pasted or a file is opened; kept out of its first load. */
export const loadPaste = () => import('./paste.ts')
export const loadPointsFile = () => import('./points-file.ts')
