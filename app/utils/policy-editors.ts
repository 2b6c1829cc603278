import type { Component } from 'vue'
import type { PolicyName } from '#shared/policies/index'
import PhrasesEditor from '~/components/policy/PhrasesEditor.vue'
import PromptContactEditor from '~/components/policy/PromptContactEditor.vue'
import ClocksEditor from '~/components/policy/ClocksEditor.vue'
import PatternsEditor from '~/components/policy/PatternsEditor.vue'
import ReportFormEditor from '~/components/policy/ReportFormEditor.vue'
import RetentionEditor from '~/components/policy/RetentionEditor.vue'
import TemperatureEditor from '~/components/policy/TemperatureEditor.vue'
import UncertaintyEditor from '~/components/policy/UncertaintyEditor.vue'
import ProtocolsEditor from '~/components/policy/ProtocolsEditor.vue'

/**
 * The form of each policy's body. An editor takes the body as v-model (it may change it in place), `errorOf(path)` with
 * paths that begin with "body.", and `readonly`.
 */
export const policyEditors: Record<PolicyName, Component> = {
  'clocks': ClocksEditor,
  'phrases': PhrasesEditor,
  'prompt-contact': PromptContactEditor,
  'temperature': TemperatureEditor,
  'uncertainty': UncertaintyEditor,
  'patterns': PatternsEditor,
  'report-form': ReportFormEditor,
  'retention': RetentionEditor,
  'protocols': ProtocolsEditor,
}
