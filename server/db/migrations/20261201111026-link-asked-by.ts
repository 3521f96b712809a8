import { Migration } from '@mikro-orm/migrations';

export class Migration20261201111026 extends Migration {

  override async up(): Promise<void> {
    this.addSql(`alter table \`link\` add column \`asked_by_id\` integer null constraint \`link_asked_by_id_foreign\` references \`person\` (\`id\`) on update cascade on delete set null;`);
    this.addSql(`create index \`link_asked_by_id_index\` on \`link\` (\`asked_by_id\`);`);
  }

}
