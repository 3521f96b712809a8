import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import type { Services } from '../http/services.ts'
import { attachFirmwareImage } from '../modules/firmware/attach-firmware-image.ts'
import { draftFirmwareVersion } from '../modules/firmware/draft-firmware-version.ts'
import { FirmwareLine } from '../modules/firmware/firmware-line.entity.ts'
import { FirmwareVersion } from '../modules/firmware/firmware-version.entity.ts'
import { makeFirmwareLine } from '../modules/firmware/make-firmware-line.ts'
import { readSchema } from '../modules/firmware/read-schema.ts'
import { publishFirmwareVersion } from '../modules/firmware/sign-firmware-version.ts'
import { makeMachine } from '../modules/machines/make-machine.ts'
import { confirmSigning } from '../modules/people/confirm-signing.ts'
import { demoSignIns } from '../modules/people/demo-sign-ins.ts'
import { foundWorkplace } from '../modules/people/found-workplace.ts'
import { invitePerson } from '../modules/people/invite-person.ts'
import { hashPassword } from '../modules/people/passwords.ts'
import { useLink } from '../modules/people/use-link.ts'
import { Mail } from '../modules/mail/mail.entity.ts'
import { projectRoot } from '../project-root.ts'
import { boardsStory } from './boards-story.ts'
import { dunlin } from './dunlin.ts'
import { evidenceStory } from './evidence-story.ts'
import { dunlinStory } from './dunlin-story.ts'
import { demoFirmwareImage } from './firmware-image.ts'
import { Story } from './story.ts'
import { teasel } from './teasel.ts'
import { teaselStory } from './teasel-story.ts'

/** How long ago the story begins. */
const daysBack = 150

/** When the story told at `now` begins. */
export const demoBegins = (now: Date) => new Date(now.getTime() - daysBack * 86_400_000)

const administrator = 'Silvan Okoro'

/** The people, by invitation and link like anybody. Signers confirm each other, the first two by the founding rule. */
async function people(story: Story, services: Services) {
  const hashes = await Promise.all(demoSignIns.map((d) => hashPassword(d.password)))
  const setPassword = async (email: string) => {
    const hash = hashes[demoSignIns.findIndex((d) => d.email === email)]
    await story.act(async (em, now) => {
      const [mail] = await em.find(Mail, { to: email, secretLink: { $ne: null } }, { orderBy: { id: 'desc' }, limit: 1 })
      await useLink(em, { secret: mail.secretLink!.split('/').at(-1)!, passwordHash: hash, now })
    })
  }
  const { baseUrl } = services.config
  const founder = demoSignIns.find((d) => d.name === administrator)!
  await story.act((em, now) => foundWorkplace(em, { name: founder.name, email: founder.email, baseUrl, now }))
  await setPassword(founder.email)
  for (const { name, email, roles } of demoSignIns) {
    if (name === administrator) continue
    await story.act(async (em, now) => invitePerson(em, { request: { name, email, roles: roles.map((role) => ({ role, machine: null })) }, person: await story.person(em, administrator), baseUrl, now }))
    await setPassword(email)
  }
  const confirm = (of: string, by: string) => story.act(async (em, now) => confirmSigning(em, { of: await story.person(em, of), person: await story.person(em, by), rule: 'optional', now }))
  await confirm('Hedda Lindqvist', 'Rafiq Sandoval')
  await confirm('Rafiq Sandoval', 'Hedda Lindqvist')
  await confirm('Ingunn Veblen', 'Hedda Lindqvist')
}

const lines = [
  { key: 'hinge', name: 'Hinge', description: 'Firmware of the small joint board: one brushed gear motor, 16-bit encoder on the output.', versions: ['2.0.0', '2.1.0'] },
  { key: 'capstan', name: 'Capstan', description: 'Firmware of the winch and roller board: higher current, encoder on the motor.', versions: ['1.2.0', '1.3.0'] },
]

/** Two firmware lines with two versions each, written by Tobias and published by Rafiq, who therefore signs no change that moves a joint to them. */
async function firmware(story: Story, { files }: Services) {
  for (const { key, name, description, versions } of lines) {
    await story.act(async (em, now) => makeFirmwareLine(em, { key, name, description, person: await story.person(em, 'Tobias Oyelaran'), now }))
    for (const version of versions) {
      const schemaText = readFileSync(join(projectRoot(), 'examples', 'firmware', `${key}-${version}.schema.json`), 'utf8')
      await story.act(async (em, now) => draftFirmwareVersion(em, { line: await em.findOneOrFail(FirmwareLine, { key }), version, schemaText, read: readSchema(schemaText), notes: '', person: await story.person(em, 'Tobias Oyelaran'), now }))
      const image = await demoFirmwareImage(files, key, version)
      await story.act(async (em, now) => attachFirmwareImage(em, { version: await em.findOneOrFail(FirmwareVersion, { line: { key }, version }, { populate: ['line'] }), image, person: await story.person(em, 'Tobias Oyelaran'), now }))
      await story.act(async (em, now) => {
        const drafted = await em.findOneOrFail(FirmwareVersion, { line: { key }, version }, { populate: ['line'] })
        await publishFirmwareVersion(em, { version: drafted, schemaHash: drafted.schemaHash, imageHash: drafted.imageSha256 ?? null, person: await story.person(em, 'Rafiq Sandoval'), now })
      })
    }
  }
}

/** Makes the demo workplace in an empty database, by the program's own acts, so that ledger, signatures and checks are real. */
export async function makeDemo(services: Services): Promise<void> {
  const story = new Story(services, demoBegins(services.now()))
  await people(story, services)
  await firmware(story, services)
  for (const [key, name, description] of [
    ['dunlin', 'Dunlin', 'six-legged mud-flat survey walker with a sounding winch'],
    ['teasel', 'Teasel', 'seed-sorting arm with a belt roller'],
  ] as const)
    await story.act(async (em, now) => makeMachine(em, { key, name, description, person: await story.person(em, administrator), now }))
  await dunlinStory(story, services, dunlin)
  await teaselStory(story, teasel)
  await boardsStory(story, services)
  await evidenceStory(story, services)
}
