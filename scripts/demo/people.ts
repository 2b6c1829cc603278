/** Everyone and every place here is invented. */
export const organisation = { name: 'Northmere Nerve Conduction Service', timeZone: 'Europe/Prague', paperSize: 'A4' as const }

export const sites = [
  { name: 'Harrowmere Clinic', town: 'Harrowmere', address: '4 Wharf Lane, Harrowmere', phone: '+00 55 0100', rooms: ['Room 1', 'Room 2'] },
  { name: 'Tarnfield Clinic', town: 'Tarnfield', address: '18 Mill Street, Tarnfield', phone: '+00 55 0200', rooms: ['Room A', 'Room B'] },
  { name: 'Osterleigh Clinic', town: 'Osterleigh', address: '2 Chapel Row, Osterleigh', phone: '+00 55 0300', rooms: ['Room 1'] },
  { name: 'Brackendale Clinic', town: 'Brackendale', address: '31 Station Road, Brackendale', phone: '+00 55 0400', rooms: ['Room 1'] },
]

/** `sites` are indices of the list above. The first of each role is printed at the start. */
export const staff = [
  { key: 'administrator', name: 'Ines Halloran', credentials: '', roles: ['administrator'], sites: [0, 1, 2, 3] },
  // The second person from the start on: later administrators need somebody's consent.
  { key: 'medical-director', name: 'Dr Henrike Solano', credentials: 'MD, PhD, neurologist', roles: ['medical-director', 'neurologist'], sites: [0, 1, 2, 3] },
  { key: 'administrator-2', name: 'Tobias Wenlock', credentials: '', roles: ['administrator'], sites: [1, 2] },
  { key: 'technologist', name: 'Mirela Oakes', credentials: 'Clinical physiologist', roles: ['technologist'], sites: [0, 1] },
  { key: 'technologist-2', name: 'Jonas Pell', credentials: 'Clinical physiologist', roles: ['technologist'], sites: [0] },
  { key: 'technologist-3', name: 'Anwen Sarkis', credentials: 'Clinical physiologist', roles: ['technologist'], sites: [1, 2] },
  { key: 'technologist-4', name: 'Ruben Achterberg', credentials: 'Clinical physiologist', roles: ['technologist'], sites: [2, 3] },
  { key: 'technologist-5', name: 'Lidia Crowhurst', credentials: 'Clinical physiologist', roles: ['technologist'], sites: [3] },
  { key: 'neurologist', name: 'Dr Eluned Varga', credentials: 'MD, neurologist', roles: ['neurologist'], sites: [0, 1, 2, 3] },
  { key: 'neurologist-2', name: 'Dr Casimir Thorne', credentials: 'MD, neurologist', roles: ['neurologist'], sites: [0, 1] },
  { key: 'neurologist-3', name: 'Dr Noor Albright', credentials: 'MD, neurologist', roles: ['neurologist'], sites: [2, 3] },
  { key: 'neurologist-in-training', name: 'Dr Amadeus Pike', credentials: 'MD', roles: ['neurologist'], sites: [0], inTraining: true },
] as const

/** Two practices hold a physician of the same name: they must be told apart by clinic and town. Who has a key opens the desk. */
export const practices = [
  { name: 'Wharf Lane Surgery', town: 'Harrowmere', physicians: [{ name: 'Dr Piers Lammond', key: 'referring-physician' }, { name: 'Dr Orla Whitcombe' }] },
  { name: 'Mill Street Practice', town: 'Tarnfield', physicians: [{ name: 'Dr Annika Brodeur' }, { name: 'Dr Martin Ashdown' }] },
  { name: 'Chapel Row Medical Centre', town: 'Osterleigh', physicians: [{ name: 'Dr Martin Ashdown' }, { name: 'Dr Selma Quist' }] },
  { name: 'Brackendale Hand Unit', town: 'Brackendale', physicians: [{ name: 'Dr Imogen Straker' }] },
  { name: 'Tarnfield Diabetes Clinic', town: 'Tarnfield', physicians: [{ name: 'Dr Viktor Lisle' }] },
  { name: 'Northmere Rheumatology', town: 'Harrowmere', physicians: [{ name: 'Dr Cora Feldstad' }, { name: 'Dr Ewan Rask' }] },
]

export const familyNames = ['Abernethy', 'Bergqvist', 'Calloway', 'Dvorsky', 'Ellingham', 'Fairweather', 'Grabowska', 'Hathersage', 'Ivanek', 'Jessop', 'Kowalczyk', 'Lindqvist', 'Maddern', 'Novák', 'Orchard', 'Penhallow', 'Quillfeather', 'Rosling', 'Šimková', 'Thackeray', 'Ullman', 'Venning', 'Wetherby', 'Yarrow', 'Zelinka', 'Ashcombe', 'Birtwhistle', 'Cattermole', 'Drinkwater', 'Entwistle']
export const womensNames = ['Agnes', 'Beatrix', 'Clara', 'Dorota', 'Edith', 'Freya', 'Greta', 'Hana', 'Isla', 'Jitka', 'Karin', 'Lena', 'Magda', 'Nela', 'Olivia', 'Petra', 'Rosa', 'Stella', 'Tereza', 'Vera']
export const mensNames = ['Adrian', 'Bohdan', 'Conrad', 'David', 'Emil', 'Felix', 'Gustav', 'Henry', 'Ivo', 'Jakub', 'Karel', 'Leo', 'Marek', 'Nils', 'Oskar', 'Pavel', 'Rafael', 'Simon', 'Tomas', 'Walter']
