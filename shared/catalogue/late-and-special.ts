import type { QuantityId } from './quantities'
import type { StimulationSite, Technique } from './types'

/** F-waves, H-reflexes, repetitive stimulation and the blink reflex. Roots: common practice. */
const fColumns: QuantityId[] = ['stimulusCount', 'responseCount', 'minimumLatencyMs', 'meanLatencyMs', 'maximumLatencyMs', 'mLatencyMs', 'limbLengthMm']
const hColumns: QuantityId[] = ['mLatencyMs', 'hLatencyMs', 'mAmplitudeMv', 'hAmplitudeMv']
const trainColumns: QuantityId[] = ['rateHz', 'secondsAfterExercise', 'amplitudeMv', 'areaMvMs']

const site = (id: string, label: string): StimulationSite[] => [{ id, label, usual: true }]
/** A row is a train; the single responses stand in its series, in mV. */
const trains: StimulationSite[] = [
  { id: 'rest', label: 'at rest', usual: true },
  { id: 'after-exercise', label: 'after exercise', usual: true },
  { id: 'high-rate', label: 'high rate' },
]

type Entry = Omit<Technique, 'kind' | 'quantities'>
const fWave = (entry: Entry): Technique => ({ ...entry, kind: 'f-wave', quantities: fColumns })
const hReflex = (entry: Entry, columns = hColumns): Technique => ({ ...entry, kind: 'h-reflex', quantities: columns })
const repetitive = (entry: Omit<Entry, 'sites'>): Technique => ({ ...entry, kind: 'repetitive', quantities: trainColumns, sites: trains })

const hand = { limb: 'arm', temperatureSegment: 'hand' } as const
const foot = { limb: 'leg', temperatureSegment: 'foot' } as const

export const lateAndSpecialTechniques: readonly Technique[] = [
  fWave({ id: 'median-f-apb', nerve: 'median', label: 'median F-wave', roots: 'C8, T1', ...hand, recording: { id: 'apb', label: 'abductor pollicis brevis', short: 'APB' }, sites: site('wrist', 'wrist') }),
  fWave({ id: 'ulnar-f-adm', nerve: 'ulnar', label: 'ulnar F-wave', roots: 'C8, T1', ...hand, recording: { id: 'adm', label: 'abductor digiti minimi', short: 'ADM' }, sites: site('wrist', 'wrist') }),
  fWave({ id: 'fibular-f-edb', nerve: 'fibular', label: 'fibular F-wave', roots: 'L5, S1', ...foot, recording: { id: 'edb', label: 'extensor digitorum brevis', short: 'EDB' }, sites: site('ankle', 'ankle') }),
  fWave({ id: 'tibial-f-ah', nerve: 'tibial', label: 'tibial F-wave', roots: 'S1, S2', ...foot, recording: { id: 'ah', label: 'abductor hallucis', short: 'AH' }, sites: site('ankle', 'ankle') }),
  hReflex({ id: 'h-reflex-soleus', nerve: 'tibial', label: 'H-reflex, soleus', roots: 'S1', ...foot, recording: { id: 'soleus', label: 'soleus', short: 'SOL' }, sites: site('popliteal-fossa', 'popliteal fossa') }, [...hColumns, 'legLengthMm']),
  hReflex({ id: 'h-reflex-fcr', nerve: 'median', label: 'H-reflex, flexor carpi radialis', roots: 'C6, C7', ...hand, recording: { id: 'fcr', label: 'flexor carpi radialis', short: 'FCR' }, sites: site('elbow', 'elbow') }),
  repetitive({ id: 'repetitive-ulnar-adm', nerve: 'ulnar', label: 'repetitive stimulation, ulnar', roots: 'C8, T1', ...hand, amplitudeDefinition: 'baseline-to-peak', recording: { id: 'adm', label: 'abductor digiti minimi', short: 'ADM' } }),
  repetitive({ id: 'repetitive-facial-nasalis', nerve: 'facial', label: 'repetitive stimulation, facial', roots: 'cranial nerve VII', limb: 'face', amplitudeDefinition: 'baseline-to-peak', recording: { id: 'nasalis', label: 'nasalis', short: 'NAS' } }),
  repetitive({ id: 'repetitive-accessory-trapezius', nerve: 'accessory', label: 'repetitive stimulation, accessory', roots: 'cranial nerve XI, C3, C4', limb: 'trunk', amplitudeDefinition: 'baseline-to-peak', recording: { id: 'trapezius', label: 'upper trapezius', short: 'TRAP' } }),
  {
    id: 'blink', kind: 'blink', nerve: 'trigeminal', label: 'blink reflex', roots: 'cranial nerves V and VII', limb: 'face',
    recording: { id: 'orbicularis-oculi', label: 'orbicularis oculi, both sides', short: 'OOc' },
    sites: site('supraorbital', 'supraorbital nerve'), quantities: ['r1Ms', 'r2IpsilateralMs', 'r2ContralateralMs'],
  },
]
