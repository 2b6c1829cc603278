import type { AbsenceTable } from './absence'
import type { AppointmentTable } from './appointment'
import type { AuditEventTable } from './audit-event'
import type { BookingTable } from './booking'
import type { BounceReportTable } from './bounce-report'
import type { CounterTable } from './counter'
import type { DeliveryTable } from './delivery'
import type { DeskDraftTable } from './desk-draft'
import type { DeskReferralTable } from './desk-referral'
import type { EmergencyAccessTable } from './emergency-access'
import type { EquipmentTable } from './equipment'
import type { LegalHoldTable } from './legal-hold'
import type { DeliveryByHandTable } from './delivery-by-hand'
import type { DeliveryReplyTable } from './delivery-reply'
import type { IncidentTable } from './incident'
import type { ListViewTable } from './list-view'
import type { MetaTable } from './meta'
import type { OneTimeLinkTable } from './one-time-link'
import type { OrganisationTable } from './organisation'
import type { OutboxMailTable } from './outbox-mail'
import type { PatientMergeTable } from './patient-merge'
import type { PatientTable } from './patient'
import type { PhysicianTable } from './physician'
import type { OutsideStudyTable } from './outside-study'
import type { OwnSetTable } from './own-set'
import type { PolicyVersionTable } from './policy-version'
import type { PracticeDelegateTable } from './practice-delegate'
import type { PracticeTable } from './practice'
import type { RecoveryCodeTable } from './recovery-code'
import type { ReferenceAdoptionTable } from './reference-adoption'
import type { ReferralTable } from './referral'
import type { ReferralCopyTable } from './referral-copy'
import type { ReferralCountTable } from './referral-count'
import type { ReferrerLetterTable } from './referrer-letter'
import type { ReportTable } from './report'
import type { ReportPdfTable } from './report-pdf'
import type { ReportVersionTable } from './report-version'
import type { ReportWriterTable } from './report-writer'
import type { RoleHoldingTable } from './role-holding'
import type { RoleProposalTable } from './role-proposal'
import type { RowCheckTable } from './row-check'
import type { SessionTable } from './session'
import type { SiteTable } from './site'
import type { SiteClosedDayTable } from './site-closed-day'
import type { SiteHoursTable } from './site-hours'
import type { SiteRoomTable } from './site-room'
import type { StateChangeTable } from './state-change'
import type { StudyTable } from './study'
import type { StudyCellTable } from './study-cell'
import type { StudyCircumstancesTable, StudyEquipmentTable } from './study-circumstances'
import type { StudyCommentTable } from './study-comment'
import type { StudyCellSaveTable } from './study-cell-save'
import type { StudyKeptCheckTable } from './study-kept-check'
import type { StudyLaterEntryTable } from './study-later-entry'
import type { StudyMoveTable } from './study-move'
import type { StudyProtocolTable } from './study-protocol'
import type { StudyQuestionTable } from './study-question'
import type { StudyRowTable } from './study-row'
import type { StudyRunTable } from './study-run'
import type { StudyTemperatureTable } from './study-temperature'
import type { StudyVisitTable } from './study-visit'
import type { TaskTable } from './task'
import type { UploadTable } from './upload'
import type { UserTable } from './user'
import type { ViewEventTable } from './view-event'

/** Table name (camel case, see CamelCasePlugin in connection.ts) to row type. */
export interface Tables {
  meta: MetaTable
  counter: CounterTable
  organisation: OrganisationTable
  site: SiteTable
  siteRoom: SiteRoomTable
  siteHours: SiteHoursTable
  siteClosedDay: SiteClosedDayTable
  user: UserTable
  recoveryCode: RecoveryCodeTable
  roleHolding: RoleHoldingTable
  absence: AbsenceTable
  emergencyAccess: EmergencyAccessTable
  roleProposal: RoleProposalTable
  legalHold: LegalHoldTable
  session: SessionTable
  oneTimeLink: OneTimeLinkTable
  practice: PracticeTable
  practiceDelegate: PracticeDelegateTable
  physician: PhysicianTable
  patient: PatientTable
  referral: ReferralTable
  referralCount: ReferralCountTable
  referralCopy: ReferralCopyTable
  deskDraft: DeskDraftTable
  deskReferral: DeskReferralTable
  referrerLetter: ReferrerLetterTable
  stateChange: StateChangeTable
  upload: UploadTable
  booking: BookingTable
  appointment: AppointmentTable
  study: StudyTable
  studyRun: StudyRunTable
  studyRow: StudyRowTable
  studyCell: StudyCellTable
  studyCellSave: StudyCellSaveTable
  studyTemperature: StudyTemperatureTable
  studyKeptCheck: StudyKeptCheckTable
  equipment: EquipmentTable
  studyCircumstances: StudyCircumstancesTable
  studyEquipment: StudyEquipmentTable
  studyComment: StudyCommentTable
  studyVisit: StudyVisitTable
  studyLaterEntry: StudyLaterEntryTable
  studyMove: StudyMoveTable
  studyProtocol: StudyProtocolTable
  studyQuestion: StudyQuestionTable
  report: ReportTable
  reportWriter: ReportWriterTable
  reportVersion: ReportVersionTable
  reportPdf: ReportPdfTable
  delivery: DeliveryTable
  outboxMail: OutboxMailTable
  bounceReport: BounceReportTable
  incident: IncidentTable
  deliveryByHand: DeliveryByHandTable
  deliveryReply: DeliveryReplyTable
  task: TaskTable
  patientMerge: PatientMergeTable
  outsideStudy: OutsideStudyTable
  ownSet: OwnSetTable
  policyVersion: PolicyVersionTable
  referenceAdoption: ReferenceAdoptionTable
  rowCheck: RowCheckTable
  listView: ListViewTable
  auditEvent: AuditEventTable
  viewEvent: ViewEventTable
}
