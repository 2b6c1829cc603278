import type { InjectionKey } from 'vue'
import type { QuestionView } from '#shared/schemas/question'

/** What the bench asked the readers about this study; fetched anew whenever one of them moves on. */
export function useBenchQuestions(studyId: string) {
  const api = useApi()
  const questions = ref<QuestionView[]>([])
  /** Set when a question was sent while no reader has the program open. */
  const nobodyHere = ref(false)

  async function load() {
    questions.value = await api<QuestionView[]>(`/api/studies/${studyId}/questions`, { background: true }).catch(() => questions.value)
  }
  async function ask(question: string, runId: string | null) {
    const { readersHere } = await api<{ readersHere: number }>(`/api/studies/${studyId}/questions`, { method: 'POST', body: { question, runId } })
    nobodyHere.value = readersHere === 0
    await load()
  }
  async function withdraw(id: string) {
    await api(`/api/questions/${id}/withdraw`, { method: 'POST', body: {} })
    await load()
  }
  onMounted(load)
  useEventStream({ kind: 'study', id: () => studyId, only: notice => notice.what.startsWith('question.') }, () => void load())
  const ofRun = (runId: string | null) => questions.value.filter(question => question.runId === runId && question.state !== 'withdrawn')
  return { questions, nobodyHere, ask, withdraw, ofRun }
}

export type BenchQuestions = ReturnType<typeof useBenchQuestions>
export const benchQuestionsKey: InjectionKey<BenchQuestions> = Symbol('bench-questions')
export function useQuestions(): BenchQuestions {
  const questions = inject(benchQuestionsKey)
  if (!questions) throw new Error('useQuestions is for components inside the bench page')
  return questions
}
