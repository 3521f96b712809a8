import { Migration } from '@mikro-orm/migrations'

/** The second factor of people, sealed, and the codes that stand in for it. */
export class Migration20261201143059 extends Migration {
  override up(): void {
    this.addSql('create table `recovery_code` (`id` integer not null primary key autoincrement, `person_id` integer not null, `code_hash` text not null, `created_at` datetime not null, `used_at` datetime null, constraint `recovery_code_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade);')
    this.addSql('create index `recovery_code_person_id_index` on `recovery_code` (`person_id`);')
    this.addSql('create unique index `recovery_code_code_hash_unique` on `recovery_code` (`code_hash`);')
    this.addSql('alter table `person` add column `signing_held_by` integer null;')
    this.addSql('alter table `person` add column `second_factor` text null;')
    this.addSql('alter table `person` add column `second_factor_at` datetime null;')
    this.addSql('alter table `person` add column `second_factor_step` integer null;')
  }
}
