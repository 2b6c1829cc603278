import { distances } from './distances'
import type { QuantityId } from './quantities'
import type { StimulationSite, Technique } from './types'

/**
 * Motor studies. Standard distances are those of the shipped reference sets (median, ulnar, fibular and tibial 80 mm;
 * first dorsal interosseous 80 to 120, extensor indicis 40 to 60, abductor digiti minimi of the foot 100 mm).
 * Roots: common practice, no publication.
 */
const motorColumns: QuantityId[] = ['latencyMs', 'amplitudeMv', 'durationMs', 'areaMvMs', 'distanceMm', 'stimulusMa']

const axilla: StimulationSite = { id: 'axilla', label: 'axilla', segmentMm: distances.upperArm, segment: { id: 'upper-arm', label: 'upper arm' } }
const erb: StimulationSite = { id: 'erb', label: 'Erb\'s point', segmentMm: distances.axillaToErb, segment: { id: 'axilla-erb', label: 'axilla to Erb\'s point' } }

const aside = (id: string, label: string): StimulationSite => ({ id, label, aside: true, segmentMm: distances.aside })
/** Where fibres may cross in the forearm or at the ankle: the other nerve stimulated, the same muscle recorded. */
const ulnarAsides = [aside('ulnar-wrist', 'ulnar nerve at the wrist'), aside('ulnar-elbow', 'ulnar nerve below the elbow')]
const medianAsides = [aside('median-wrist', 'median nerve at the wrist'), aside('median-elbow', 'median nerve at the elbow')]
const accessoryFibular = aside('lateral-malleolus', 'behind the lateral malleolus')

/**
 * Short segments of 20 mm, the most distal site first (steps of 20 mm: common practice). The first distance runs to the
 * recording electrode, the others to the step before.
 */
function shortSteps(names: readonly (readonly [id: string, label: string])[], first: StimulationSite['segmentMm']): StimulationSite[] {
  return names.map(([id, label], index) => index === 0
    ? { id, label, usual: true, segmentMm: first }
    : { id, label, usual: true, standardDistanceMm: 20, segmentMm: distances.shortStep, segment: { id: `step-${index}`, label: `step to ${label}`, entrapment: true } })
}
const elbowSteps = [['elbow-minus-4', '4 cm below the epicondyle'], ['elbow-minus-2', '2 cm below the epicondyle'], ['elbow-0', 'medial epicondyle'], ['elbow-plus-2', '2 cm above the epicondyle'], ['elbow-plus-4', '4 cm above the epicondyle']] as const
const kneeSteps = [['head-minus-4', '4 cm below the fibular head'], ['head-minus-2', '2 cm below the fibular head'], ['head-0', 'fibular head'], ['head-plus-2', '2 cm above the fibular head'], ['head-plus-4', '4 cm above the fibular head']] as const
const noShortLimits = 'No shipped set has limits for short segments; the steps are compared with each other.'

const medianSites: StimulationSite[] = [
  { id: 'palm', label: 'palm', segmentMm: distances.palm },
  { id: 'wrist', label: 'wrist', usual: true, segmentMm: distances.distalMotor, segment: { id: 'wrist-palm', label: 'wrist to palm', entrapment: true } },
  { id: 'elbow', label: 'elbow', usual: true, segmentMm: distances.forearm, segment: { id: 'forearm', label: 'forearm' } },
  axilla,
  erb,
]

const ulnarSites: StimulationSite[] = [
  { id: 'palm', label: 'palm', segmentMm: distances.palm },
  { id: 'wrist', label: 'wrist', usual: true, segmentMm: distances.distalMotor, segment: { id: 'wrist-palm', label: 'wrist to palm', entrapment: true } },
  { id: 'below-elbow', label: 'below elbow', usual: true, segmentMm: distances.forearm, segment: { id: 'forearm', label: 'forearm' } },
  { id: 'above-elbow', label: 'above elbow', usual: true, segmentMm: distances.acrossElbow, segment: { id: 'across-elbow', label: 'across the elbow', entrapment: true } },
  axilla,
  erb,
]

const wristOnly = (sites: StimulationSite[]): StimulationSite[] =>
  sites.map(site => ({ ...site, usual: site.id === 'wrist' }))

const radialSites: StimulationSite[] = [
  { id: 'forearm', label: 'forearm', usual: true, segmentMm: distances.distalMotor },
  { id: 'elbow', label: 'elbow', usual: true, segmentMm: distances.radialForearm, segment: { id: 'forearm', label: 'forearm' } },
  { id: 'below-spiral-groove', label: 'below spiral groove', usual: true, segmentMm: distances.spiralGroove, segment: { id: 'lower-arm', label: 'elbow to below the spiral groove' } },
  { id: 'above-spiral-groove', label: 'above spiral groove', segmentMm: distances.spiralGroove, segment: { id: 'across-spiral-groove', label: 'across the spiral groove', entrapment: true } },
  axilla,
  erb,
]

const fibularHead = (usualDistal: boolean): StimulationSite[] => [
  { id: 'below-fibular-head', label: 'below fibular head', usual: true, segmentMm: usualDistal ? distances.proximalMuscle : distances.ankleToFibularHead, ...(usualDistal ? {} : { segment: { id: 'leg', label: 'ankle to below the fibular head' } }) },
  { id: 'above-fibular-head', label: 'above fibular head (popliteal)', usual: true, segmentMm: distances.acrossFibularHead, segment: { id: 'across-fibular-head', label: 'across the fibular head', entrapment: true } },
]

const tibialSites: StimulationSite[] = [
  { id: 'ankle', label: 'ankle', usual: true, segmentMm: distances.distalMotor },
  { id: 'popliteal-fossa', label: 'popliteal fossa', usual: true, segmentMm: distances.ankleToPoplitealFossa, segment: { id: 'leg', label: 'ankle to popliteal fossa' } },
]

type Entry = Omit<Technique, 'kind' | 'quantities' | 'amplitudeDefinition'>
const motor = (entry: Entry): Technique =>
  ({ ...entry, kind: 'motor', amplitudeDefinition: 'baseline-to-peak', quantities: motorColumns })

export const motorTechniques: readonly Technique[] = [
  motor({
    id: 'median-motor-apb', nerve: 'median', label: 'median motor', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'apb', label: 'abductor pollicis brevis', short: 'APB' }, standardDistanceMm: 80, sites: [...medianSites, ...ulnarAsides],
  }),
  motor({
    id: 'median-motor-lumbrical', nerve: 'median', label: 'median motor, second lumbrical', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'lumbrical-2', label: 'second lumbrical', short: 'L2' }, standardDistanceMm: 100, sites: wristOnly(medianSites),
  }),
  motor({
    id: 'ulnar-motor-adm', nerve: 'ulnar', label: 'ulnar motor', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'adm', label: 'abductor digiti minimi', short: 'ADM' }, standardDistanceMm: 80, sites: [...ulnarSites, ...medianAsides],
  }),
  motor({
    id: 'ulnar-motor-fdi', nerve: 'ulnar', label: 'ulnar motor, first dorsal interosseous', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'fdi', label: 'first dorsal interosseous', short: 'FDI' }, standardDistanceMm: 100, sites: [...ulnarSites, ...medianAsides],
  }),
  motor({
    id: 'ulnar-motor-adm-short', nerve: 'ulnar', label: 'ulnar motor, short segments across the elbow', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'adm', label: 'abductor digiti minimi', short: 'ADM' }, shortSegments: true, withoutLimits: noShortLimits, sites: shortSteps(elbowSteps, distances.forearm),
  }),
  motor({
    id: 'ulnar-motor-interosseous', nerve: 'ulnar', label: 'ulnar motor, interosseous beside second lumbrical', roots: 'C8, T1', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'interosseous', label: 'interosseous, electrode of second lumbrical', short: 'INT' }, standardDistanceMm: 100, sites: wristOnly(ulnarSites),
  }),
  motor({
    id: 'radial-motor-eip', nerve: 'radial', label: 'radial motor', roots: 'C7, C8', limb: 'arm', temperatureSegment: 'hand',
    recording: { id: 'eip', label: 'extensor indicis proprius', short: 'EIP' }, standardDistanceMm: 50, sites: radialSites,
  }),
  motor({
    id: 'musculocutaneous-motor-biceps', nerve: 'musculocutaneous', label: 'musculocutaneous motor', roots: 'C5, C6', limb: 'arm',
    recording: { id: 'biceps', label: 'biceps brachii', short: 'BIC' },
    sites: [
      { id: 'axilla', label: 'axilla', segmentMm: distances.proximalMuscle },
      { id: 'erb', label: 'Erb\'s point', usual: true, segmentMm: distances.proximalMuscle, segment: { id: 'axilla-erb', label: 'axilla to Erb\'s point' } },
    ],
  }),
  motor({
    id: 'axillary-motor-deltoid', nerve: 'axillary', label: 'axillary motor', roots: 'C5, C6', limb: 'arm',
    recording: { id: 'deltoid', label: 'deltoid', short: 'DEL' },
    sites: [{ id: 'erb', label: 'Erb\'s point', usual: true, segmentMm: distances.proximalMuscle }],
  }),
  motor({
    id: 'facial-motor-nasalis', nerve: 'facial', label: 'facial motor', roots: 'cranial nerve VII', limb: 'face',
    recording: { id: 'nasalis', label: 'nasalis', short: 'NAS' },
    sites: [{ id: 'mastoid', label: 'below the ear, in front of the mastoid', usual: true, segmentMm: distances.proximalMuscle }],
  }),
  motor({
    id: 'fibular-motor-edb', nerve: 'fibular', label: 'fibular motor', roots: 'L5, S1', limb: 'leg', temperatureSegment: 'foot',
    recording: { id: 'edb', label: 'extensor digitorum brevis', short: 'EDB' }, standardDistanceMm: 80,
    sites: [{ id: 'ankle', label: 'ankle', usual: true, segmentMm: distances.distalMotor }, ...fibularHead(false), accessoryFibular],
  }),
  motor({
    id: 'fibular-motor-edb-short', nerve: 'fibular', label: 'fibular motor, short segments across the fibular head', roots: 'L5, S1', limb: 'leg', temperatureSegment: 'foot',
    recording: { id: 'edb', label: 'extensor digitorum brevis', short: 'EDB' }, shortSegments: true, withoutLimits: noShortLimits, sites: shortSteps(kneeSteps, distances.ankleToFibularHead),
  }),
  motor({
    id: 'fibular-motor-ta', nerve: 'fibular', label: 'fibular motor, tibialis anterior', roots: 'L4, L5', limb: 'leg', temperatureSegment: 'foot',
    recording: { id: 'ta', label: 'tibialis anterior', short: 'TA' }, sites: fibularHead(true),
  }),
  motor({
    id: 'tibial-motor-ah', nerve: 'tibial', label: 'tibial motor', roots: 'S1, S2', limb: 'leg', temperatureSegment: 'foot',
    recording: { id: 'ah', label: 'abductor hallucis', short: 'AH' }, standardDistanceMm: 80, sites: tibialSites,
  }),
  motor({
    id: 'tibial-motor-adq', nerve: 'tibial', label: 'tibial motor, abductor digiti quinti', roots: 'S1, S2', limb: 'leg', temperatureSegment: 'foot',
    recording: { id: 'adq', label: 'abductor digiti quinti of the foot', short: 'ADQ' }, standardDistanceMm: 100, sites: tibialSites,
  }),
  motor({
    id: 'femoral-motor-quadriceps', nerve: 'femoral', label: 'femoral motor', roots: 'L2 to L4', limb: 'leg',
    recording: { id: 'quadriceps', label: 'quadriceps (rectus femoris)', short: 'QUAD' },
    withoutLimits: 'No shipped set has limits for the femoral nerve; compare the two sides.',
    sites: [
      { id: 'below-inguinal-ligament', label: 'below inguinal ligament', usual: true, segmentMm: distances.proximalMuscle },
      { id: 'above-inguinal-ligament', label: 'above inguinal ligament', segmentMm: distances.acrossInguinalLigament, segment: { id: 'across-inguinal-ligament', label: 'across the inguinal ligament', entrapment: true } },
    ],
  }),
]
