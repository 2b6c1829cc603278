/** The study of the journey: an invented person and invented values, on the set aanem-ndtf-2016. */
export interface TypedRun { title: string, technique: string, side: 'RIGHT' | 'LEFT', rows: { site: string, cells: Record<string, string> }[] }

export const routePatient = { familyName: 'Halvorsen', givenName: 'Ingrid', birthDate: '1974-03-14' }

const sensory = (side: TypedRun['side'], nerve: 'median' | 'ulnar', onset: string, peak: string, amplitude: string): TypedRun =>
  ({ title: `${nerve} sensory, ${nerve === 'median' ? 'digit 2' : 'digit 5'}`, technique: nerve === 'median' ? 'median-sensory-d2' : 'ulnar-sensory-d5', side, rows: [{ site: 'wrist', cells: { onset, peak, amplitude, distance: '140' } }] })

export const routeRuns: TypedRun[] = [
  { title: 'median motor', technique: 'median-motor-apb', side: 'RIGHT', rows: [
    { site: 'wrist', cells: { latency: '5.2', amplitude: '6.8', distance: '80' } },
    { site: 'elbow', cells: { latency: '9.2', amplitude: '6.5', distance: '215' } },
  ] },
  sensory('RIGHT', 'median', '3.8', '4.6', '12'),
  sensory('RIGHT', 'ulnar', '2.7', '3.3', '14'),
  { title: 'ulnar motor', technique: 'ulnar-motor-adm', side: 'RIGHT', rows: [
    { site: 'wrist', cells: { latency: '2.9', amplitude: '9.6', distance: '80' } },
    { site: 'below elbow', cells: { latency: '6.4', amplitude: '9.4', distance: '205' } },
    { site: 'above elbow', cells: { latency: '8.1', amplitude: '9.2', distance: '100' } },
  ] },
  { title: 'median motor', technique: 'median-motor-apb', side: 'LEFT', rows: [
    { site: 'wrist', cells: { latency: '3.9', amplitude: '8.1', distance: '80' } },
    { site: 'elbow', cells: { latency: '7.8', amplitude: '8.0', distance: '210' } },
  ] },
  sensory('LEFT', 'median', '3.0', '3.7', '18'),
  sensory('LEFT', 'ulnar', '2.8', '3.4', '16'),
]
