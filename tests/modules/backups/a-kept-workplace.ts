import { Readable } from 'node:stream'
import { fileStore } from '../../../server/db/file-store.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import { FirmwareVersion } from '../../../server/modules/firmware/firmware-version.entity.ts'
import { makeBackup, type MadeBackup } from '../../../server/modules/backups/make-backup.ts'
import { aFolder } from '../../db/a-folder.ts'
import { aDraft, aWalker, through, type Walker } from '../../support/a-walker.ts'

export interface KeptWalker extends Walker {
  dataDir: string
  backupDir: string
  /** SHA-256 of the firmware image that hinge 2.1.0 bears */
  imageSha256: string
  backUp(): Promise<MadeBackup>
  /** SHA-256 of the ledger's last entry */
  head(): Promise<{ entries: number; lastHash: string }>
}

/** A walker with a release, whose firmware has an image in the store, in a data folder of its own. */
export async function aKeptWalker({ released = true } = {}): Promise<KeptWalker> {
  const dataDir = aFolder()
  const w = await aWalker()
  w.services.config = { ...w.services.config, dataDir, backupDir: `${dataDir}/backups`, backupsKept: 3 }
  w.services.files = fileStore(`${dataDir}/files`)
  const received = await w.services.files.receive(Readable.from([Buffer.from('firmware of hinge 2.1.0')]), 1000)
  await w.services.files.keep(received)
  const em = w.orm.em.fork()
  Object.assign((await em.find(FirmwareVersion, {}))[0], { imageSha256: received.sha256, imageBytes: received.bytes, imageFormat: 'bin', imageName: 'hinge.bin' })
  await em.flush()
  if (released) await through(w, await aDraft(w))
  return {
    ...w,
    dataDir,
    backupDir: `${dataDir}/backups`,
    imageSha256: received.sha256,
    backUp: () => makeBackup({ orm: w.orm, files: w.services.files.directory, folder: `${dataDir}/backups` }, { now: w.services.now(), occasion: 'asked' }),
    async head() {
      const [last] = await w.orm.em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1 })
      return { entries: last.sequence, lastHash: last.hash }
    },
  }
}
