/** The night when clocks go back has two o'clock twice: both read 02:30, an hour apart. */
export const moments = [
  { instant: '2026-03-09T13:02:00Z', zone: 'Europe/Prague', text: '9 Mar 2026, 14:02' },
  { instant: '2026-07-09T22:30:00Z', zone: 'Europe/Prague', text: '10 Jul 2026, 00:30' },
  { instant: '2026-10-25T00:30:00Z', zone: 'Europe/Prague', text: '25 Oct 2026, 02:30' },
  { instant: '2026-10-25T01:30:00Z', zone: 'Europe/Prague', text: '25 Oct 2026, 02:30' },
]
export const csvRows = [
  { cell: 'plain', written: 'plain' },
  { cell: 'a,b', written: '"a,b"' },
  { cell: 'say "so"', written: '"say ""so"""' },
  { cell: '=1+1', written: '\'=1+1' },
  { cell: '@sum', written: '\'@sum' },
  { cell: '-3.5', written: '-3.5' },
]
