import { mkdirSync } from 'node:fs'
import { type Config, readConfig } from '../config.ts'
import { holdDatabase } from '../db/only-process.ts'
import type { Orm } from '../db/orm.ts'
import { openWorkplaceDatabase, placesOf } from '../modules/backups/open-workplace.ts'

/** Runs work while no server may use the database of DETENT_DATA. @throws DatabaseInUse */
export async function whileHeld<T>(work: (config: Config) => Promise<T>): Promise<T> {
  const config = readConfig(process.env)
  mkdirSync(config.dataDir, { recursive: true, mode: 0o700 })
  const release = holdDatabase(placesOf(config).database)
  try {
    return await work(config)
  } finally {
    release()
  }
}

/** Runs work on the database of DETENT_DATA, which no server may be using meanwhile. */
export function onDatabase<T>(work: (orm: Orm, config: Config) => Promise<T>): Promise<T> {
  return whileHeld(async (config) => {
    const orm = await openWorkplaceDatabase(config)
    try {
      return await work(orm, config)
    } finally {
      await orm.close(true)
    }
  })
}
