import { Migration } from '@mikro-orm/migrations'

const writtenOnce = ['release_kit', 'workplace_key']
const columns = ['image_sha256', 'image_bytes', 'image_format', 'image_name']

/** The workplace's public keys, what a release's kit is made again from, and firmware images of versions. */
export class Migration20261201121144 extends Migration {
  override up(): void {
    this.addSql('create table `release_kit` (`id` integer not null primary key autoincrement, `release_id` integer not null, `manifest` text not null, `manifest_sha256` text not null, `signature` blob not null, `envelope` text not null, `sums_signature` blob not null, `public_key` text not null, `key_id` text not null, `zip_bytes` integer not null, constraint `release_kit_release_id_foreign` foreign key(`release_id`) references `release`(`id`) on update cascade);')
    this.addSql('create unique index `release_kit_release_id_unique` on `release_kit` (`release_id`);')
    this.addSql('create index `release_kit_key_id_index` on `release_kit` (`key_id`);')

    this.addSql('create table `workplace_key` (`id` integer not null primary key autoincrement, `key_id` text not null, `public_key` text not null, `from` datetime not null, `made_by_id` integer null, constraint `workplace_key_made_by_id_foreign` foreign key(`made_by_id`) references `person`(`id`) on delete set null on update cascade);')
    this.addSql('create unique index `workplace_key_key_id_unique` on `workplace_key` (`key_id`);')
    this.addSql('create index `workplace_key_made_by_id_index` on `workplace_key` (`made_by_id`);')

    this.addSql('alter table `firmware_version` add column `image_sha256` text null;')
    this.addSql('alter table `firmware_version` add column `image_bytes` integer null;')
    this.addSql('alter table `firmware_version` add column `image_format` text null;')
    this.addSql('alter table `firmware_version` add column `image_name` text null;')

    for (const table of writtenOnce)
      for (const act of ['update', 'delete'])
        this.addSql(`create trigger \`${table}_no_${act}\` before ${act} on \`${table}\` begin select raise(abort, '${table} rows are written once'); end;`)
  }

  override down(): void {
    for (const column of columns) this.addSql(`alter table \`firmware_version\` drop column \`${column}\`;`)
    for (const table of writtenOnce) this.addSql(`drop table \`${table}\`;`)
  }
}
