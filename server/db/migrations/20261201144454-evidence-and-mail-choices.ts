import { Migration } from '@mikro-orm/migrations';

export class Migration20261201144454 extends Migration {

  override async up(): Promise<void> {
    this.addSql(`create table \`evidence\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`number\` integer not null, \`joint_key\` text not null, \`change_id\` integer null, \`name\` text not null, \`sha256\` text not null, \`bytes\` integer not null, \`stored_sha256\` text not null, \`stored_bytes\` integer not null, \`layout\` json not null, \`mapping\` json null, \`reading\` json null, \`columns_sha256\` text null, \`uploaded_by_id\` integer not null, \`uploaded_by_name\` text not null, \`uploaded_at\` datetime not null, \`read_at\` datetime null, \`removed_at\` datetime null, \`removed_by_name\` text null, constraint \`evidence_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade, constraint \`evidence_change_id_foreign\` foreign key(\`change_id\`) references \`change\`(\`id\`) on delete set null on update cascade, constraint \`evidence_uploaded_by_id_foreign\` foreign key(\`uploaded_by_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`evidence_machine_id_index\` on \`evidence\` (\`machine_id\`);`);
    this.addSql(`create index \`evidence_joint_key_index\` on \`evidence\` (\`joint_key\`);`);
    this.addSql(`create index \`evidence_change_id_index\` on \`evidence\` (\`change_id\`);`);
    this.addSql(`create index \`evidence_uploaded_by_id_index\` on \`evidence\` (\`uploaded_by_id\`);`);
    this.addSql(`create unique index \`evidence_machine_id_number_unique\` on \`evidence\` (\`machine_id\`, \`number\`);`);

    this.addSql(`alter table \`person\` add column \`mail_choices\` json null;`);

    this.addSql(`alter table \`mail\` add column \`topic\` text not null default 'account';`);
  }

}
