import type { InjectionKey, Ref } from 'vue'

const key: InjectionKey<Ref<readonly string[]>> = Symbol('highlighted runs')

/**
 * Which runs a sentence under the pointer or the focus rests on. The page provides it once; sentences set it and
 * tables show it.
 *
 * @example
 * provideRunHighlight() // in the page
 * const { highlighted, show, hide } = useRunHighlight() // in a sentence or a table
 */
export function provideRunHighlight() {
  provide(key, ref<readonly string[]>([]))
}

export function useRunHighlight() {
  const highlighted = inject(key, () => ref<readonly string[]>([]), true)
  const show = (runIds: readonly string[]) => highlighted.value = runIds
  const hide = () => highlighted.value = []
  const isHighlighted = (runIds: readonly (string | undefined)[]) => runIds.some(id => id !== undefined && highlighted.value.includes(id))
  return { highlighted, show, hide, isHighlighted }
}
