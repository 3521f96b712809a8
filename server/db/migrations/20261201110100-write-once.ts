import { Migration } from '@mikro-orm/migrations'

const tables = ['change_event', 'check_report', 'draft_point', 'drive_train', 'ledger_entry', 'release', 'release_joint', 'revision', 'signature', 'withdrawal']

/** What is written once stays as written, whoever asks: the triggers refuse what goes around the flush guard. */
export class Migration20261201110100 extends Migration {
  override up(): void {
    for (const table of tables)
      for (const act of ['update', 'delete'])
        this.addSql(`create trigger \`${table}_no_${act}\` before ${act} on \`${table}\` begin select raise(abort, '${table} rows are written once'); end;`)
  }

  override down(): void {
    for (const table of tables) for (const act of ['update', 'delete']) this.addSql(`drop trigger \`${table}_no_${act}\`;`)
  }
}
