import { Migration } from '@mikro-orm/migrations'

/** Boards with their history, which is written once, and bench keys. */
export class Migration20261201120833 extends Migration {
  override up(): void {
    this.addSql('create table `bench_key` (`id` integer not null primary key autoincrement, `person_id` integer not null, `name` text not null, `secret_hash` text not null, `begins` text not null, `machines` json not null, `created_at` datetime not null, `expires_at` datetime not null, `revoked_at` datetime null, `last_used_at` datetime null, constraint `bench_key_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade);')
    this.addSql('create index `bench_key_person_id_index` on `bench_key` (`person_id`);')
    this.addSql('create unique index `bench_key_secret_hash_unique` on `bench_key` (`secret_hash`);')
    this.addSql('create table `board` (`id` integer not null primary key autoincrement, `serial` text not null, `serial_key` text not null, `machine_id` integer not null, `joint_id` integer null, `firmware` text null, `release_id` integer null, `image_of_id` integer null, `known` text null, `known_at` datetime null, `known_by` text null, `bench_set` text null, `read_back` text null, `created_at` datetime not null, `retired_at` datetime null, constraint `board_machine_id_foreign` foreign key(`machine_id`) references `machine`(`id`) on update cascade, constraint `board_joint_id_foreign` foreign key(`joint_id`) references `joint`(`id`) on delete set null on update cascade, constraint `board_release_id_foreign` foreign key(`release_id`) references `release`(`id`) on delete set null on update cascade, constraint `board_image_of_id_foreign` foreign key(`image_of_id`) references `joint`(`id`) on delete set null on update cascade);')
    this.addSql('create unique index `board_serial_key_unique` on `board` (`serial_key`);')
    this.addSql('create index `board_machine_id_index` on `board` (`machine_id`);')
    this.addSql('create index `board_joint_id_index` on `board` (`joint_id`);')
    this.addSql('create unique index `board_joint_id_unique` on `board` (`joint_id`);')
    this.addSql('create index `board_release_id_index` on `board` (`release_id`);')
    this.addSql('create index `board_image_of_id_index` on `board` (`image_of_id`);')
    this.addSql('create table `board_event` (`id` integer not null primary key autoincrement, `board_id` integer not null, `kind` text not null, `at` datetime not null, `person_id` integer not null, `person_name` text not null, `bench_key` text null, `joint_id` integer null, `from_id` integer null, `release_id` integer null, `note` text not null, `read_back` json null, `dump` blob null, constraint `board_event_board_id_foreign` foreign key(`board_id`) references `board`(`id`) on update cascade, constraint `board_event_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade, constraint `board_event_joint_id_foreign` foreign key(`joint_id`) references `joint`(`id`) on delete set null on update cascade, constraint `board_event_from_id_foreign` foreign key(`from_id`) references `joint`(`id`) on delete set null on update cascade, constraint `board_event_release_id_foreign` foreign key(`release_id`) references `release`(`id`) on delete set null on update cascade);')
    this.addSql('create index `board_event_board_id_index` on `board_event` (`board_id`);')
    this.addSql('create index `board_event_person_id_index` on `board_event` (`person_id`);')
    this.addSql('create index `board_event_joint_id_index` on `board_event` (`joint_id`);')
    this.addSql('create index `board_event_from_id_index` on `board_event` (`from_id`);')
    this.addSql('create index `board_event_release_id_index` on `board_event` (`release_id`);')
    for (const act of ['update', 'delete']) this.addSql(`create trigger \`board_event_no_${act}\` before ${act} on \`board_event\` begin select raise(abort, 'board_event rows are written once'); end;`)
  }

  override down(): void {
    for (const table of ['board_event', 'board', 'bench_key']) this.addSql(`drop table \`${table}\`;`)
  }
}
