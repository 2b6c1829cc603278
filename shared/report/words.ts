import { isReportLanguage, type ReportLanguage } from './languages'
import { de } from './words/de'
import { en, type ReportWords } from './words/en'

const languages: Record<ReportLanguage, ReportWords> = { en, de }

/** The words of a language; English where there are none. */
export const reportWords = (language: string): ReportWords => isReportLanguage(language) ? languages[language] : en
export type { ReportWords } from './words/en'
