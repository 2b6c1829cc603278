import { expect } from 'vitest'
import { signIn, type App } from './app'

export interface Wish { protocol: 'carpal-tunnel' | 'ulnar-elbow' | 'polyneuropathy' | 'foot-drop', side: 'right' | 'left' | 'both', familyName: string, question: string, /** an earlier patient of this name; else a new one is made */ patientId?: string, /** where several are booked */ time?: string }

/**
 * A referral of an invented woman, accepted with the protocol and booked for today, late in the evening, where the
 * technologist works. It goes through the administrator's own routes; what the pages of intake do is tested elsewhere.
 */
export async function bookStudy(app: App, { protocol, side, familyName, question, patientId, time = patientId ? '22:30' : '23:15' }: Wish): Promise<{ referralId: string, patientName: string }> {
  const { page, context } = await app.open()
  await signIn(app, page, app.person('administrator'))
  const call = async <T>(path: string, data?: object): Promise<T> => {
    const answer = await context.request.fetch(`${app.origin}${path}`, data ? { method: 'POST', data } : {})
    expect([path, answer.status(), answer.ok() ? '' : await answer.text()]).toEqual([path, expect.any(Number), ''])
    return await answer.json() as T
  }
  const { sites } = await call<{ sites: { id: string, name: string, timeZone: string }[] }>('/api/me')
  const site = sites.find(each => each.name === 'Harrowmere Clinic')!
  const physicians = await call<{ rows: { id: string }[] }>('/api/directory/physicians?search=Whitcombe')
  const patient = patientId ? { id: patientId } : await call<{ id: string }>('/api/patients', { familyName, givenName: 'Tove', birthDate: '1971-05-20', sexForLimits: 'female' })
  const { id } = await call<{ id: string }>('/api/referrals', {
    patientId: patient.id, siteId: site.id, physicianId: physicians.rows[0]!.id, clinicalQuestion: question, side, symptoms: 'Numbness for half a year.', examination: 'Reduced touch.',
    cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' }, consentElectronic: 'yes',
  })
  await call(`/api/referrals/${id}/receive`, {})
  await call(`/api/referrals/${id}/accept`, { protocol })
  const date = new Intl.DateTimeFormat('en-CA', { timeZone: site.timeZone }).format(new Date())
  await call(`/api/referrals/${id}/book`, { siteId: site.id, room: 'Room 2', date, time, minutes: 30, outsideHours: true })
  await context.close()
  return { referralId: id, patientName: `${familyName}, Tove` }
}
