import { Migration } from '@mikro-orm/migrations';

export class Migration20261201111901 extends Migration {

  override async up(): Promise<void> {
    this.addSql(`create index \`ledger_entry_person_id_index\` on \`ledger_entry\` (\`person_id\`);`);
    this.addSql(`create index \`ledger_entry_act_index\` on \`ledger_entry\` (\`act\`);`);
  }

}
