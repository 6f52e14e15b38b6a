/** Version of the numbers. A change of any number that a function of this folder returns is a new version. */
export const SOLVER_VERSION = '1.0.0'
