import type { SizeResult, SizingDesign } from '../../../shared/solver/sizing/types.ts'

/** What an explanation is about: the design and its answer. */
export type Explained = { design: SizingDesign; result: SizeResult }
