/** A record's id that says which it is. */
export const recordIdOf = (n: number) => `01a230b2-a46d-7315-89af-${String(n).padStart(12, '0')}`
