/** Languages a report can be written in. A further one is a file in `words/`, a line here, in `words.ts` and in `side-words.ts`. */
export const reportLanguages = ['en', 'de'] as const
export const otherLanguages = ['de'] as const satisfies readonly Exclude<(typeof reportLanguages)[number], 'en'>[]
export type OtherLanguage = (typeof otherLanguages)[number]
export type ReportLanguage = (typeof reportLanguages)[number]
export const languageNames: Record<ReportLanguage, string> = { en: 'English', de: 'German (Deutsch)' }
export const isReportLanguage = (language: string): language is ReportLanguage => (reportLanguages as readonly string[]).includes(language)
