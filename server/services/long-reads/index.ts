import { ledgerCheck } from './ledger-check'
import { overview, overviewCases } from './overview'
import { whatIf } from './what-if'

/** Reads that may take a second or more: they run in a thread of their own on a connection that can write nothing. */
export const longReads = { overview, overviewCases, ledgerCheck, whatIf } as const

export type LongReadName = keyof typeof longReads
export type LongReadInput<N extends LongReadName> = Parameters<(typeof longReads)[N]>[1]
export type LongReadResult<N extends LongReadName> = Awaited<ReturnType<(typeof longReads)[N]>>
