import type { Limb, Technique } from './types'

/**
 * Needle examination: one entry per muscle, with nerve and roots (common practice, no publication).
 * The scales are conventional steps, not measurements.
 */
const grades = ['0', '1+', '2+', '3+', '4+'] as const
const step = ['normal', 'slightly reduced', 'reduced', 'greatly reduced', 'slightly increased', 'increased', 'greatly increased'] as const

export const needleScales: NonNullable<Technique['ordinals']> = [
  { id: 'insertional', label: 'insertional activity', choices: ['normal', 'decreased', 'increased'] },
  { id: 'fibrillations', label: 'fibrillation potentials', choices: grades },
  { id: 'positiveWaves', label: 'positive sharp waves', choices: grades },
  { id: 'fasciculations', label: 'fasciculation potentials', choices: grades },
  { id: 'other', label: 'other spontaneous activity', choices: ['none', 'complex repetitive', 'myotonic', 'myokymic', 'neuromyotonic', 'cramp'] },
  { id: 'unitAmplitude', label: 'motor unit amplitude', choices: step },
  { id: 'unitDuration', label: 'motor unit duration', choices: step },
  { id: 'polyphasia', label: 'polyphasic units', choices: ['none', 'few', 'some', 'many'] },
  { id: 'recruitment', label: 'recruitment', choices: ['normal', 'slightly reduced', 'reduced', 'single units', 'early', 'no units'] },
  { id: 'pattern', label: 'pattern at full effort', choices: ['full', 'reduced', 'discrete', 'single units', 'none', 'effort not full'] },
]

/** muscle id, label, short name, nerve id, roots, limb */
type Muscle = [id: string, label: string, short: string, nerve: string, roots: string, limb: Limb]

const muscles: readonly Muscle[] = [
  ['apb', 'abductor pollicis brevis', 'APB', 'median', 'C8, T1', 'arm'],
  ['fdi', 'first dorsal interosseous', 'FDI', 'ulnar', 'C8, T1', 'arm'],
  ['adm', 'abductor digiti minimi', 'ADM', 'ulnar', 'C8, T1', 'arm'],
  ['fpl', 'flexor pollicis longus', 'FPL', 'median', 'C7 to T1', 'arm'],
  ['pronator-teres', 'pronator teres', 'PT', 'median', 'C6, C7', 'arm'],
  ['fcr', 'flexor carpi radialis', 'FCR', 'median', 'C6, C7', 'arm'],
  ['fcu', 'flexor carpi ulnaris', 'FCU', 'ulnar', 'C7 to T1', 'arm'],
  ['fdp-ulnar', 'flexor digitorum profundus, digits 4 and 5', 'FDP', 'ulnar', 'C8, T1', 'arm'],
  ['eip', 'extensor indicis proprius', 'EIP', 'radial', 'C7, C8', 'arm'],
  ['edc', 'extensor digitorum communis', 'EDC', 'radial', 'C7, C8', 'arm'],
  ['ecr', 'extensor carpi radialis', 'ECR', 'radial', 'C6, C7', 'arm'],
  ['brachioradialis', 'brachioradialis', 'BR', 'radial', 'C5, C6', 'arm'],
  ['triceps', 'triceps brachii', 'TRI', 'radial', 'C6 to C8', 'arm'],
  ['biceps', 'biceps brachii', 'BIC', 'musculocutaneous', 'C5, C6', 'arm'],
  ['deltoid', 'deltoid', 'DEL', 'axillary', 'C5, C6', 'arm'],
  ['infraspinatus', 'infraspinatus', 'INF', 'suprascapular', 'C5, C6', 'arm'],
  ['supraspinatus', 'supraspinatus', 'SUP', 'suprascapular', 'C5, C6', 'arm'],
  ['serratus-anterior', 'serratus anterior', 'SER', 'long-thoracic', 'C5 to C7', 'trunk'],
  ['latissimus-dorsi', 'latissimus dorsi', 'LAT', 'thoracodorsal', 'C6 to C8', 'trunk'],
  ['trapezius', 'upper trapezius', 'TRAP', 'accessory', 'cranial nerve XI, C3, C4', 'trunk'],
  ['cervical-paraspinal', 'cervical paraspinal', 'PSP-C', 'posterior-rami', 'C3 to T1', 'trunk'],
  ['thoracic-paraspinal', 'thoracic paraspinal', 'PSP-T', 'posterior-rami', 'T1 to T12', 'trunk'],
  ['lumbar-paraspinal', 'lumbar paraspinal', 'PSP-L', 'posterior-rami', 'L2 to S1', 'trunk'],
  ['iliopsoas', 'iliopsoas', 'ILP', 'femoral', 'L2, L3', 'leg'],
  ['vastus-lateralis', 'vastus lateralis', 'VL', 'femoral', 'L2 to L4', 'leg'],
  ['vastus-medialis', 'vastus medialis', 'VM', 'femoral', 'L2 to L4', 'leg'],
  ['rectus-femoris', 'rectus femoris', 'RF', 'femoral', 'L2 to L4', 'leg'],
  ['adductor-longus', 'adductor longus', 'ADD', 'obturator', 'L2 to L4', 'leg'],
  ['gluteus-medius', 'gluteus medius', 'GMED', 'superior-gluteal', 'L4 to S1', 'leg'],
  ['tensor-fasciae-latae', 'tensor fasciae latae', 'TFL', 'superior-gluteal', 'L4 to S1', 'leg'],
  ['gluteus-maximus', 'gluteus maximus', 'GMAX', 'inferior-gluteal', 'L5 to S2', 'leg'],
  ['biceps-femoris-short', 'biceps femoris, short head', 'BFS', 'sciatic', 'L5 to S2', 'leg'],
  ['biceps-femoris-long', 'biceps femoris, long head', 'BFL', 'sciatic', 'L5 to S2', 'leg'],
  ['ta', 'tibialis anterior', 'TA', 'fibular', 'L4, L5', 'leg'],
  ['ehl', 'extensor hallucis longus', 'EHL', 'fibular', 'L5, S1', 'leg'],
  ['fibularis-longus', 'fibularis longus', 'FL', 'superficial-fibular', 'L5, S1', 'leg'],
  ['edb', 'extensor digitorum brevis', 'EDB', 'fibular', 'L5, S1', 'leg'],
  ['tibialis-posterior', 'tibialis posterior', 'TP', 'tibial', 'L4, L5', 'leg'],
  ['fdl', 'flexor digitorum longus', 'FDL', 'tibial', 'L5 to S2', 'leg'],
  ['gastrocnemius-medial', 'gastrocnemius, medial head', 'GAM', 'tibial', 'S1, S2', 'leg'],
  ['soleus', 'soleus', 'SOL', 'tibial', 'S1, S2', 'leg'],
  ['ah', 'abductor hallucis', 'AH', 'tibial', 'S1, S2', 'leg'],
  ['orbicularis-oculi', 'orbicularis oculi', 'OOc', 'facial', 'cranial nerve VII', 'face'],
  ['frontalis', 'frontalis', 'FRO', 'facial', 'cranial nerve VII', 'face'],
  ['masseter', 'masseter', 'MAS', 'trigeminal', 'cranial nerve V', 'face'],
  ['tongue', 'tongue (genioglossus)', 'TON', 'hypoglossal', 'cranial nerve XII', 'face'],
]

export const needleTechniques: readonly Technique[] = muscles.map(([id, label, short, nerve, roots, limb]) => ({
  id: `needle-${id}`, kind: 'needle', nerve, label: `needle, ${label}`, roots, limb,
  recording: { id, label, short },
  sites: [{ id: 'muscle', label: 'muscle', usual: true }],
  quantities: [], ordinals: needleScales,
  withoutLimits: 'The scales of the needle examination are steps that people judge; no set gives limits for them.',
}))
