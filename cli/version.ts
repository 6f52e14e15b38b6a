/** Put in by the build from package.json. */
declare const OGEE_VERSION: string | undefined

export const version = typeof OGEE_VERSION === 'string' ? OGEE_VERSION : '0.0.0-source'
