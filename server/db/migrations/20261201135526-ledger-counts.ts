import { Migration } from '@mikro-orm/migrations'

/** Entries of one machine and one act are counted from an index alone. */
export class Migration20261201135526 extends Migration {
  override up(): void {
    this.addSql('create index `ledger_entry_machine_key_act_index` on `ledger_entry` (`machine_key`, `act`);')
  }

  override down(): void {
    this.addSql('drop index `ledger_entry_machine_key_act_index`;')
  }
}
