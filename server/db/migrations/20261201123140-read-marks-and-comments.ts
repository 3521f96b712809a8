import { Migration } from '@mikro-orm/migrations'

const writtenOnce = ['comment', 'comment_answer']

/** Rows of a change that its reviewers have read, and comments with the marks that they are answered. */
export class Migration20261201123140 extends Migration {
  override up(): void {
    this.addSql('create table `read_mark` (`id` integer not null primary key autoincrement, `change_id` integer not null, `person_id` integer not null, `round` integer not null, `row` text not null, `row_hash` text not null, `at` datetime not null, constraint `read_mark_change_id_foreign` foreign key(`change_id`) references `change`(`id`) on update cascade, constraint `read_mark_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade);')
    this.addSql('create index `read_mark_change_id_index` on `read_mark` (`change_id`);')
    this.addSql('create index `read_mark_person_id_index` on `read_mark` (`person_id`);')
    this.addSql('create unique index `read_mark_change_id_person_id_row_row_hash_unique` on `read_mark` (`change_id`, `person_id`, `row`, `row_hash`);')

    this.addSql('create table `comment` (`id` integer not null primary key autoincrement, `change_id` integer not null, `number` integer not null, `person_id` integer not null, `person_name` text not null, `roles` text not null, `at` datetime not null, `text` text not null, `place` json not null, `about` text not null, `named` json not null, `under` integer null, constraint `comment_change_id_foreign` foreign key(`change_id`) references `change`(`id`) on update cascade, constraint `comment_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade);')
    this.addSql('create index `comment_change_id_index` on `comment` (`change_id`);')
    this.addSql('create index `comment_person_id_index` on `comment` (`person_id`);')
    this.addSql('create unique index `comment_change_id_number_unique` on `comment` (`change_id`, `number`);')

    this.addSql('create table `comment_answer` (`id` integer not null primary key autoincrement, `comment_id` integer not null, `person_id` integer not null, `person_name` text not null, `at` datetime not null, constraint `comment_answer_comment_id_foreign` foreign key(`comment_id`) references `comment`(`id`) on update cascade, constraint `comment_answer_person_id_foreign` foreign key(`person_id`) references `person`(`id`) on update cascade);')
    this.addSql('create unique index `comment_answer_comment_id_unique` on `comment_answer` (`comment_id`);')
    this.addSql('create index `comment_answer_person_id_index` on `comment_answer` (`person_id`);')

    for (const table of writtenOnce)
      for (const act of ['update', 'delete'])
        this.addSql(`create trigger \`${table}_no_${act}\` before ${act} on \`${table}\` begin select raise(abort, '${table} rows are written once'); end;`)
  }

  override down(): void {
    for (const table of ['comment_answer', 'comment', 'read_mark']) this.addSql(`drop table \`${table}\`;`)
  }
}
