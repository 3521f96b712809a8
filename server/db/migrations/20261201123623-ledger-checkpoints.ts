import { Migration } from '@mikro-orm/migrations'

/** Signed ends of the ledger, written once. */
export class Migration20261201123623 extends Migration {
  override up(): void {
    this.addSql('create table `ledger_checkpoint` (`id` integer not null primary key autoincrement, `sequence` integer not null, `hash` text not null, `at` datetime not null, `occasion` text not null, `key_id` text not null, `signature` text not null);')
    for (const act of ['update', 'delete'])
      this.addSql(`create trigger \`ledger_checkpoint_no_${act}\` before ${act} on \`ledger_checkpoint\` begin select raise(abort, 'ledger_checkpoint rows are written once'); end;`)
  }

  override down(): void {
    this.addSql('drop table `ledger_checkpoint`;')
  }
}
