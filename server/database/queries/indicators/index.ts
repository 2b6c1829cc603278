import type { IndicatorCase, IndicatorId } from '#shared/indicators'
import type { Database } from '../../connection'
import { coldRepeatCases, keptCheckCases, outputCases, repeatVisitCases, temperatureCases } from './bench'
import type { Span } from './cases'
import { acknowledgeCases, deliverCases, notAcknowledgedCases, withdrawnCases } from './dispatch'
import { noShowCases, returnedCases, waitCases } from './intake'
import { abnormalCases, laterVersionCases, signCases, toldAgainCases, unsignedCases } from './reading'

/** Where each indicator's cases come from. `now` is for those that ask what waits at this moment. */
export const indicatorCases: Record<IndicatorId, (db: Database, span: Span, now: string) => Promise<IndicatorCase[]>> = {
  'wait': waitCases,
  'returned': returnedCases,
  'no-show': noShowCases,
  'temperature': temperatureCases,
  'cold-repeat': coldRepeatCases,
  'repeat-visit': repeatVisitCases,
  'abnormal': abnormalCases,
  'sign': signCases,
  'deliver': deliverCases,
  'acknowledge': acknowledgeCases,
  'unsigned': unsignedCases,
  'later-version': laterVersionCases,
  'told-again': toldAgainCases,
  'not-acknowledged': notAcknowledgedCases,
  'withdrawn': withdrawnCases,
  'kept-check': keptCheckCases,
  'output': outputCases,
}

export type { Span } from './cases'
