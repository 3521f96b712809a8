import { join, resolve } from 'node:path'
import { secondFactorRules, type SecondFactorRule } from '../shared/contract/second-factor.ts'

/** How the program runs; read once at start, from the environment. */
export interface Config {
  /** folder of the database and the files beside it */
  dataDir: string
  host: string
  port: number
  /** `demo` makes the demo workplace when the database is empty and shows its sign-ins; `workplace` starts empty */
  mode: 'demo' | 'workplace'
  /** who needs a second factor; by default nobody in the demo, whoever signs in a real workplace */
  secondFactor: SecondFactorRule
  /** costly requests that one person may make in a minute */
  costlyPerMinute: number
  /** where people reach the program: links in mails begin with it */
  baseUrl: string
  /** SMTP server as a URL, or null for the local fake transport */
  smtpUrl: string | null
  mailFrom: string
  /** cookies only over TLS, HSTS: when the base URL is https */
  secure: boolean
  /** folder of the backups */
  backupDir: string
  /** hour of the server's clock at which one is made, or null for none by itself */
  backupHour: number | null
  /** how many backups are kept */
  backupsKept: number
}

const oneOf = <T extends string>(name: string, value: string, allowed: readonly T[]): T => {
  if (!allowed.includes(value as T)) throw new Error(`${name} is "${value}"; it takes ${allowed.join(' or ')}.`)
  return value as T
}

const whole = (name: string, value: string, least: number, most: number): number => {
  const number = Number(value)
  if (!/^\d+$/.test(value) || number < least || number > most) throw new Error(`${name} is "${value}"; it takes a whole number from ${least} to ${most}.`)
  return number
}

/** @throws Error naming the variable that cannot be used, and what it takes */
export function readConfig(env: NodeJS.ProcessEnv): Config {
  const port = Number(env.DETENT_PORT ?? 4870)
  if (!Number.isInteger(port) || port < 0 || port > 65535) throw new Error(`DETENT_PORT is "${env.DETENT_PORT}"; it takes a port number from 0 to 65535.`)
  const host = env.DETENT_HOST ?? '127.0.0.1'
  const baseUrl = (env.DETENT_BASE_URL ?? `http://${host}:${port}`).replace(/\/$/, '')
  if (!/^https?:\/\/[^/\s]+/.test(baseUrl)) throw new Error(`DETENT_BASE_URL is "${baseUrl}"; it takes an http or https address.`)
  const dataDir = resolve(env.DETENT_DATA ?? '.data')
  const mode = oneOf('DETENT_MODE', env.DETENT_MODE ?? 'demo', ['demo', 'workplace'])
  const hour = env.DETENT_BACKUP_HOUR ?? '2'
  return {
    dataDir,
    host,
    port,
    mode,
    secondFactor: oneOf('DETENT_SECOND_FACTOR', env.DETENT_SECOND_FACTOR ?? (mode === 'demo' ? 'optional' : 'signers'), secondFactorRules),
    costlyPerMinute: whole('DETENT_COSTLY_PER_MINUTE', env.DETENT_COSTLY_PER_MINUTE ?? '120', 1, 1_000_000),
    baseUrl,
    smtpUrl: env.DETENT_SMTP_URL ?? null,
    mailFrom: env.DETENT_MAIL_FROM ?? 'Detent <detent@localhost>',
    secure: baseUrl.startsWith('https:'),
    backupDir: resolve(env.DETENT_BACKUPS ?? join(dataDir, 'backups')),
    backupHour: hour === 'off' ? null : whole('DETENT_BACKUP_HOUR', hour, 0, 23),
    backupsKept: whole('DETENT_BACKUPS_KEPT', env.DETENT_BACKUPS_KEPT ?? '14', 1, 1000),
  }
}
