import type { MessagePort } from 'node:worker_threads'
import { perform, type Task } from './task.ts'

/** Runs on a worker thread; never opens the database. */
export default ({ task, port }: { task: Task; port: MessagePort | null }) => perform(task, (done) => port?.postMessage(done))
