import ical, { ICalCalendarMethod, ICalEventStatus } from 'ical-generator'
import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

/** Date, place and how to prepare: nothing of the patient, nothing medical. */
export const appointmentSchema = z.object({
  kind: z.enum(['new', 'moved', 'cancelled', 'reminder']),
  /** The language of the report; English where there are no words of it. */
  language: z.string().max(5),
  startsAt: z.iso.datetime(),
  endsAt: z.iso.datetime(),
  timeZone: z.string(),
  organisation: z.string(),
  siteName: z.string(),
  address: z.string(),
  town: z.string(),
  sitePhone: z.string(),
  /** Of the calendar entry: random, the same for ever; each change has a higher sequence. */
  uid: z.string(),
  sequence: z.number().int().min(0),
  /** When the entry was made or changed. */
  stamp: z.iso.datetime(),
  organizerAddress: z.string(),
})
export type AppointmentMail = z.infer<typeof appointmentSchema>

interface Words {
  locale: string
  subject: Record<AppointmentMail['kind'], string>
  opening: Record<AppointmentMail['kind'], string>
  prepare: string
  absent: (phone: string) => string
  calendar: string
  entry: string
}

/** How to prepare: common practice (warm limbs, since a cold nerve conducts more slowly; no cream, since electrodes must hold). */
const words: Record<string, Words> = {
  en: {
    locale: 'en-GB',
    subject: { new: 'Your appointment', moved: 'Your appointment has a new time', cancelled: 'Your appointment is called off', reminder: 'Reminder of your appointment' },
    opening: { new: 'Your appointment is on', moved: 'Your appointment has moved. It is now on', cancelled: 'This appointment is called off, do not come:', reminder: 'Your appointment is on' },
    prepare: 'Come with warm hands and feet: wear gloves and warm socks on the way. Use no cream, lotion or oil on arms and legs on that day.',
    absent: phone => phone ? `If you cannot come, telephone ${phone}.` : 'If you cannot come, telephone us.',
    calendar: 'The attached file puts it into your calendar.', entry: 'Appointment',
  },
  de: {
    locale: 'de-DE',
    subject: { new: 'Ihr Termin', moved: 'Ihr Termin hat eine neue Zeit', cancelled: 'Ihr Termin ist abgesagt', reminder: 'Erinnerung an Ihren Termin' },
    opening: { new: 'Ihr Termin ist am', moved: 'Ihr Termin wurde verlegt. Er ist jetzt am', cancelled: 'Dieser Termin ist abgesagt, bitte kommen Sie nicht:', reminder: 'Ihr Termin ist am' },
    prepare: 'Kommen Sie mit warmen Händen und Füßen: Tragen Sie unterwegs Handschuhe und warme Socken. Verwenden Sie an diesem Tag keine Creme, keine Lotion und kein Öl an Armen und Beinen.',
    absent: phone => phone ? `Wenn Sie nicht kommen können, rufen Sie an: ${phone}.` : 'Wenn Sie nicht kommen können, rufen Sie uns an.',
    calendar: 'Die angehängte Datei trägt ihn in Ihren Kalender ein.', entry: 'Termin',
  },
  fr: {
    locale: 'fr-FR',
    subject: { new: 'Votre rendez-vous', moved: 'Votre rendez-vous a une nouvelle date', cancelled: 'Votre rendez-vous est annulé', reminder: 'Rappel de votre rendez-vous' },
    opening: { new: 'Votre rendez-vous est le', moved: 'Votre rendez-vous est déplacé. Il est maintenant le', cancelled: 'Ce rendez-vous est annulé, ne venez pas :', reminder: 'Votre rendez-vous est le' },
    prepare: 'Venez avec les mains et les pieds chauds : portez des gants et des chaussettes chaudes en chemin. N’utilisez ni crème, ni lotion, ni huile sur les bras et les jambes ce jour-là.',
    absent: phone => phone ? `Si vous ne pouvez pas venir, téléphonez au ${phone}.` : 'Si vous ne pouvez pas venir, téléphonez-nous.',
    calendar: 'Le fichier joint l’ajoute à votre agenda.', entry: 'Rendez-vous',
  },
  es: {
    locale: 'es-ES',
    subject: { new: 'Su cita', moved: 'Su cita tiene una nueva fecha', cancelled: 'Su cita está anulada', reminder: 'Recordatorio de su cita' },
    opening: { new: 'Su cita es el', moved: 'Su cita se ha cambiado. Ahora es el', cancelled: 'Esta cita está anulada, no venga:', reminder: 'Su cita es el' },
    prepare: 'Venga con las manos y los pies calientes: lleve guantes y calcetines de abrigo por el camino. No use crema, loción ni aceite en brazos y piernas ese día.',
    absent: phone => phone ? `Si no puede venir, llame al ${phone}.` : 'Si no puede venir, llámenos.',
    calendar: 'El archivo adjunto la añade a su calendario.', entry: 'Cita',
  },
}
const wordsOf = (language: string): Words => words[language.slice(0, 2)] ?? words.en!

const placeOf = ({ siteName, address, town }: AppointmentMail) => [siteName, address, town].filter(Boolean).join(', ')

/** @example '3 December 2026 at 10:15' with the weekday before it, as the language writes it */
function momentOf({ startsAt, timeZone }: AppointmentMail, locale: string): string {
  const at = new Date(startsAt)
  const day = new Intl.DateTimeFormat(locale, { timeZone, weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' }).format(at)
  return `${day}, ${new Intl.DateTimeFormat(locale, { timeZone, hour: '2-digit', minute: '2-digit', hourCycle: 'h23' }).format(at)}`
}

/**
 * The calendar entry (RFC 5545, iTIP methods of RFC 5546). Moments stand in UTC, which every calendar shows in its own
 * zone. It names no attendee: an address would be the patient's, and nobody waits for an answer.
 */
export function appointmentCalendar(data: AppointmentMail): { method: 'REQUEST' | 'CANCEL', text: string } {
  const cancelled = data.kind === 'cancelled'
  const calendar = ical({ prodId: { company: 'Orthodrome', product: 'appointments', language: 'EN' }, method: cancelled ? ICalCalendarMethod.CANCEL : ICalCalendarMethod.REQUEST })
  calendar.createEvent({
    id: data.uid, sequence: data.sequence, stamp: new Date(data.stamp), start: new Date(data.startsAt), end: new Date(data.endsAt),
    summary: `${wordsOf(data.language).entry}, ${data.siteName}`, location: placeOf(data), organizer: { name: data.organisation, email: data.organizerAddress },
    status: cancelled ? ICalEventStatus.CANCELLED : ICalEventStatus.CONFIRMED,
  })
  return { method: cancelled ? 'CANCEL' : 'REQUEST', text: calendar.toString() }
}

/** The mail to a patient about an appointment, with the calendar entry. */
export function appointment(data: AppointmentMail): MailText {
  const say = wordsOf(data.language)
  const coming = data.kind === 'cancelled' ? [] : [say.prepare, say.absent(data.sitePhone)]
  const content = mailText(say.subject[data.kind], [
    `${say.opening[data.kind]} ${momentOf(data, say.locale)}.`,
    placeOf(data),
    ...coming,
    say.calendar,
    [data.organisation, data.siteName, data.sitePhone].filter(Boolean).join(', '),
  ], data.language.slice(0, 2) in words ? data.language.slice(0, 2) : 'en')
  return { ...content, calendar: appointmentCalendar(data) }
}
