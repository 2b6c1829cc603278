import { missingForBooking, referralSchema, type ReferralInput, type ReferralView } from '#shared/schemas/referral'
import type { ChosenPhysician } from '~/components/intake/PhysicianPicker.vue'

type Theirs = ReferralInput & { revision: number }

/** The fields of a view that the form edits, and nothing else. */
const inputOf = (view: ReferralView): ReferralInput => referralSchema.parse(view)

/**
 * One referral and the unsaved edits of its form. Saving is compare-and-set on the revision: when somebody else saved
 * meanwhile, `theirs` holds their values and nothing of one's own is lost.
 */
export async function useReferral(id: string) {
  const api = useApi()
  const { may } = useSession()
  const path = `/api/referrals/${encodeURIComponent(id)}`
  const { data: view, error, refresh } = await useFetch<ReferralView>(path)
  if (error.value || !view.value) throw createError({ statusCode: error.value?.statusCode ?? 404, fatal: true })

  const values = ref(inputOf(view.value))
  const revision = ref(view.value.revision)
  const known = ref<Record<string, ChosenPhysician>>(Object.fromEntries([view.value.physician, ...view.value.copyPhysicians].flatMap(p => p ? [[p.id, p]] : [])))
  const kept = ref(JSON.stringify(values.value))
  const theirs = ref<Theirs | null>(null)
  const savedAt = ref<string | null>(null)
  const { busy, problem, fields, send } = useSending()

  const dirty = computed(() => JSON.stringify(values.value) !== kept.value)
  const missing = computed(() => missingForBooking(values.value))
  const editable = computed(() => may('referral.write', view.value?.siteId) && !['answered', 'declined', 'cancelled', 'entered-in-error'].includes(view.value?.state ?? ''))

  /** After a save or a step: the server's view, and the form as the server has it. */
  async function reload() {
    await refresh()
    if (!view.value) return
    values.value = inputOf(view.value)
    revision.value = view.value.revision
    kept.value = JSON.stringify(values.value)
    theirs.value = null
  }

  /** True when everything typed is stored. */
  async function save(): Promise<boolean> {
    if (!dirty.value) return true
    const done = await send(async () => {
      const body = { ...referralSchema.parse(values.value), revision: revision.value }
      await api(path, { method: 'PUT', body })
      return true
    })
    if (problem.value?.code === 'changed-meanwhile') theirs.value = (problem.value.details as { theirs?: Theirs } | undefined)?.theirs ?? null
    if (!done) return false
    await reload()
    savedAt.value = new Date().toISOString()
    return true
  }

  /** Saves mine over what the other person wrote. */
  async function keepMine() {
    if (theirs.value) revision.value = theirs.value.revision
    theirs.value = null
    return save()
  }

  /** One step of the route: stores the form first, so that nobody accepts what is not on the server. */
  async function step(name: string, body: object = {}): Promise<boolean> {
    if (editable.value && !await save()) return false
    const done = await send(async () => {
      await api(`${path}/${name}`, { method: 'POST', body })
      return true
    })
    if (done) await reload()
    return done ?? false
  }

  function choosePhysician(physician: ChosenPhysician | null) {
    if (physician) known.value[physician.id] = physician
    values.value.physicianId = physician?.id ?? null
  }
  function chooseCopies(copies: ChosenPhysician[]) {
    for (const copy of copies) known.value[copy.id] = copy
    values.value.copyPhysicianIds = copies.map(copy => copy.id)
  }
  const physician = computed(() => values.value.physicianId ? known.value[values.value.physicianId] ?? null : null)
  const copies = computed(() => values.value.copyPhysicianIds.map(copy => known.value[copy] ?? { id: copy, name: 'A physician of the directory', practiceName: '', town: '', emailVerified: true }))

  return { path, view: view as Ref<ReferralView>, values, dirty, missing, editable, busy, problem, fields, theirs, savedAt, physician, copies, choosePhysician, chooseCopies, save, keepMine, reload, refresh, step }
}
