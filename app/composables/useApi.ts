import { FetchError } from 'ofetch'
import { errors, type ApiErrorBody, type ErrorCode, type FieldError } from '#shared/errors'

/** What every refused or failed request becomes: a code, words for people, and complaints about fields. */
export class ApiError extends Error {
  constructor(readonly body: ApiErrorBody, readonly status: number) {
    super(body.message)
    this.name = 'ApiError'
  }

  get code(): ErrorCode {
    return this.body.code
  }
}

const OFFLINE: ApiErrorBody = { code: 'unexpected', message: 'The server cannot be reached. What you typed is kept on this page; try again.' }

/** The body of an error answer, whichever way the server wrapped it. */
function errorBody(error: FetchError): ApiErrorBody {
  const data = error.data as { code?: unknown, data?: unknown } | undefined
  for (const body of [data, data?.data] as ({ code?: unknown } | undefined)[]) {
    if (body && typeof body.code === 'string' && body.code in errors) return body as ApiErrorBody
  }
  return error.status ? { code: 'unexpected', message: errors.unexpected.screen } : OFFLINE
}

/** Anything thrown by a request, as an ApiError. */
export function toApiError(error: unknown): ApiError {
  if (error instanceof ApiError) return error
  if (error instanceof FetchError) return new ApiError(errorBody(error), error.status ?? 0)
  throw error
}

/** `background`: asked by the program itself, so that it does not count as use of the workstation. */
interface ApiOptions { background?: boolean, method?: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE', body?: object | FormData, query?: Record<string, unknown>, signal?: AbortSignal }

/**
 * A request with typed errors; for reads use `useFetch`. Nothing is retried: a repeated POST could act twice.
 *
 * @example
 * const api = useApi()
 * const report = await api<{ reportId: string }>(`/api/studies/${id}/sign`, { method: 'POST', body })
 */
export function useApi() {
  const requestFetch = useRequestFetch()
  const signedOut = useSignedOut()
  const person = usePersonMark()
  return async function api<T>(path: string, { background, ...options }: ApiOptions = {}): Promise<T> {
    try {
      const headers = { ...background ? { 'x-background': '1' } : {}, ...options.method && options.method !== 'GET' ? person() : {} }
      return await requestFetch<T>(path, { retry: 0, ...options, headers } as Parameters<typeof requestFetch>[1]) as T
    }
    catch (error) {
      const known = toApiError(error)
      if (known.code === 'not-signed-in') signedOut.value = true
      throw known
    }
  }
}

/**
 * Whose page this is, sent with every change: when somebody else has signed in in another tab meanwhile, the server
 * refuses, and nothing typed by one person is stored in another's name.
 */
export function usePersonMark() {
  const { user } = useSession()
  return (): Record<string, string> => user.value ? { 'x-person': user.value.id } : {}
}

/** True once a request was refused because the session ended; the frame then offers to sign in again in a new tab. */
export function useSignedOut() {
  return storeToRefs(useSessionStore()).signedOut
}

/**
 * One act of a page at a time: whether it is under way, and what went wrong, for `<ErrorSummary>`.
 *
 * @example
 * const { busy, problem, fields, send } = useSending()
 * const saved = await send(() => api<SiteView>('/api/sites', { method: 'POST', body }))
 * if (saved) …
 */
export function useSending() {
  const busy = ref(false)
  const problem = ref<ApiErrorBody | null>(null)
  const fields = computed<FieldError[]>(() => problem.value?.fields ?? [])

  async function send<T>(act: () => Promise<T>): Promise<T | undefined> {
    if (busy.value) return undefined
    busy.value = true
    problem.value = null
    try {
      return await act()
    }
    catch (error) {
      problem.value = toApiError(error).body
      return undefined
    }
    finally {
      busy.value = false
    }
  }
  return { busy, problem, fields, send }
}
