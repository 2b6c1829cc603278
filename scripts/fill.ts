// npm run fill -- --studies N [--seed N]: adds N invented finished studies to a demonstration, in bulk, to measure with.
import { parseArgs } from 'node:util'
import { fillFolder } from './fill/fill-folder'
import { needDatabase, scriptSettings } from './settings'

const { values } = parseArgs({ options: { studies: { type: 'string' }, seed: { type: 'string', default: '2026' } } })
const studies = Number(values.studies)
if (!Number.isInteger(studies) || studies < 1 || studies > 1_000_000) {
  console.error('Say how many: npm run fill -- --studies 1000 (at most 1,000,000)')
  process.exit(1)
}
const { settings, keyFile, database } = scriptSettings()
needDatabase(database)

const from = Date.now()
const seconds = () => Math.round((Date.now() - from) / 1000)
let told = 0
try {
  await fillFolder({
    settings, keyFile, studies, seed: Number(values.seed), today: new Date(),
    progress: (done) => {
      if (seconds() - told < 5) return
      told = seconds()
      console.log(`${done.toLocaleString('en')} of ${studies.toLocaleString('en')} after ${told} s`)
    },
  })
  console.log(`Filled ${studies.toLocaleString('en')} invented studies into ${settings.dataDir} in ${seconds()} s.`)
}
catch (error) {
  console.error(error instanceof Error ? error.message : String(error))
  process.exitCode = 1
}
