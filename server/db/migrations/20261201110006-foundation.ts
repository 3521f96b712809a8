import { Migration } from '@mikro-orm/migrations';

export class Migration20261201110006 extends Migration {

  override async up(): Promise<void> {
    this.addSql(`create table \`firmware_line\` (\`id\` integer not null primary key autoincrement, \`key\` text not null, \`name\` text not null, \`description\` text not null, \`created_at\` datetime not null);`);
    this.addSql(`create unique index \`firmware_line_key_unique\` on \`firmware_line\` (\`key\`);`);

    this.addSql(`create table \`ledger_entry\` (\`sequence\` integer not null, \`at\` datetime not null, \`person_id\` integer null, \`person_name\` text not null, \`act\` text not null, \`machine_key\` text null, \`subject\` json not null, \`details\` json not null, \`previous_hash\` text not null, \`hash\` text not null, primary key (\`sequence\`));`);
    this.addSql(`create index \`ledger_entry_machine_key_index\` on \`ledger_entry\` (\`machine_key\`);`);
    this.addSql(`create unique index \`ledger_entry_hash_unique\` on \`ledger_entry\` (\`hash\`);`);

    this.addSql(`create table \`machine\` (\`id\` integer not null primary key autoincrement, \`key\` text not null, \`name\` text not null, \`description\` text not null, \`created_at\` datetime not null, \`retired_at\` datetime null, \`last_change\` integer not null default 0, \`last_sequence\` integer not null default 0);`);
    this.addSql(`create unique index \`machine_key_unique\` on \`machine\` (\`key\`);`);

    this.addSql(`create table \`joint\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`key\` text not null, \`name\` text not null, \`created_at\` datetime not null, \`retired_at\` datetime null, constraint \`joint_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`joint_machine_id_index\` on \`joint\` (\`machine_id\`);`);
    this.addSql(`create unique index \`joint_machine_id_key_unique\` on \`joint\` (\`machine_id\`, \`key\`);`);

    this.addSql(`create table \`family\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`key\` text not null, \`name\` text not null, \`created_at\` datetime not null, \`retired_at\` datetime null, constraint \`family_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`family_machine_id_index\` on \`family\` (\`machine_id\`);`);
    this.addSql(`create unique index \`family_machine_id_key_unique\` on \`family\` (\`machine_id\`, \`key\`);`);

    this.addSql(`create table \`drive_train\` (\`id\` integer not null primary key autoincrement, \`family_id\` integer not null, \`number\` integer not null, \`settings\` json not null, \`content_hash\` text not null, \`created_at\` datetime not null, constraint \`drive_train_family_id_foreign\` foreign key(\`family_id\`) references \`family\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`drive_train_family_id_index\` on \`drive_train\` (\`family_id\`);`);
    this.addSql(`create unique index \`drive_train_family_id_number_unique\` on \`drive_train\` (\`family_id\`, \`number\`);`);

    this.addSql(`create table \`bus\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`key\` text not null, \`name\` text not null, \`created_at\` datetime not null, \`retired_at\` datetime null, constraint \`bus_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`bus_machine_id_index\` on \`bus\` (\`machine_id\`);`);
    this.addSql(`create unique index \`bus_machine_id_key_unique\` on \`bus\` (\`machine_id\`, \`key\`);`);

    this.addSql(`create table \`person\` (\`id\` integer not null primary key autoincrement, \`name\` text not null, \`email\` text not null, \`password_hash\` text null, \`signing_hold\` text null, \`disabled_at\` datetime null, \`created_at\` datetime not null);`);
    this.addSql(`create unique index \`person_email_unique\` on \`person\` (\`email\`);`);

    this.addSql(`create table \`mail\` (\`id\` integer not null primary key autoincrement, \`person_id\` integer null, \`to\` text not null, \`subject\` text not null, \`text\` text not null, \`secret_link\` text null, \`state\` text not null, \`attempts\` integer not null default 0, \`created_at\` datetime not null, \`next_attempt_at\` datetime not null, \`sent_at\` datetime null, \`last_error\` text null, constraint \`mail_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`mail_person_id_index\` on \`mail\` (\`person_id\`);`);

    this.addSql(`create table \`link\` (\`id\` integer not null primary key autoincrement, \`person_id\` integer not null, \`kind\` text not null, \`secret_hash\` text not null, \`created_at\` datetime not null, \`expires_at\` datetime not null, \`used_at\` datetime null, constraint \`link_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`link_person_id_index\` on \`link\` (\`person_id\`);`);
    this.addSql(`create unique index \`link_secret_hash_unique\` on \`link\` (\`secret_hash\`);`);

    this.addSql(`create table \`firmware_version\` (\`id\` integer not null primary key autoincrement, \`line_id\` integer not null, \`version\` text not null, \`state\` text not null, \`schema_text\` text not null, \`schema_hash\` text not null, \`notes\` text not null, \`uploaded_by_id\` integer not null, \`created_at\` datetime not null, \`published_by_id\` integer null, \`published_at\` datetime null, \`retired_by_id\` integer null, \`retired_at\` datetime null, \`revision\` integer not null default 1, constraint \`firmware_version_line_id_foreign\` foreign key(\`line_id\`) references \`firmware_line\`(\`id\`) on update cascade, constraint \`firmware_version_uploaded_by_id_foreign\` foreign key(\`uploaded_by_id\`) references \`person\`(\`id\`) on update cascade, constraint \`firmware_version_published_by_id_foreign\` foreign key(\`published_by_id\`) references \`person\`(\`id\`) on delete set null on update cascade, constraint \`firmware_version_retired_by_id_foreign\` foreign key(\`retired_by_id\`) references \`person\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`firmware_version_line_id_index\` on \`firmware_version\` (\`line_id\`);`);
    this.addSql(`create index \`firmware_version_uploaded_by_id_index\` on \`firmware_version\` (\`uploaded_by_id\`);`);
    this.addSql(`create index \`firmware_version_published_by_id_index\` on \`firmware_version\` (\`published_by_id\`);`);
    this.addSql(`create index \`firmware_version_retired_by_id_index\` on \`firmware_version\` (\`retired_by_id\`);`);
    this.addSql(`create unique index \`firmware_version_line_id_version_unique\` on \`firmware_version\` (\`line_id\`, \`version\`);`);

    this.addSql(`create table \`policy_version\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`number\` integer not null, \`content\` json not null, \`reason\` text not null, \`author_id\` integer null, \`proposed_at\` datetime not null, \`signed_by_id\` integer null, \`signed_at\` datetime null, \`declined_at\` datetime null, constraint \`policy_version_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade, constraint \`policy_version_author_id_foreign\` foreign key(\`author_id\`) references \`person\`(\`id\`) on delete set null on update cascade, constraint \`policy_version_signed_by_id_foreign\` foreign key(\`signed_by_id\`) references \`person\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`policy_version_machine_id_index\` on \`policy_version\` (\`machine_id\`);`);
    this.addSql(`create index \`policy_version_author_id_index\` on \`policy_version\` (\`author_id\`);`);
    this.addSql(`create index \`policy_version_signed_by_id_index\` on \`policy_version\` (\`signed_by_id\`);`);
    this.addSql(`create unique index \`policy_version_machine_id_number_unique\` on \`policy_version\` (\`machine_id\`, \`number\`);`);

    this.addSql(`create table \`receipt\` (\`id\` integer not null primary key autoincrement, \`person_id\` integer not null, \`key\` text not null, \`request_hash\` text not null, \`status\` integer not null, \`body\` text not null, \`created_at\` datetime not null);`);
    this.addSql(`create unique index \`receipt_person_id_key_unique\` on \`receipt\` (\`person_id\`, \`key\`);`);

    this.addSql(`create table \`release\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`version\` text not null, \`sequence\` integer not null, \`change_number\` integer not null, \`change_title\` text not null, \`reason\` text not null, \`set\` json not null, \`content_hash\` text not null, \`content\` text not null, \`proposed_step\` text not null, \`step\` text not null, \`step_reason\` text not null, \`released_by_id\` integer not null, \`released_at\` datetime not null, constraint \`release_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade, constraint \`release_released_by_id_foreign\` foreign key(\`released_by_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`release_machine_id_index\` on \`release\` (\`machine_id\`);`);
    this.addSql(`create index \`release_released_by_id_index\` on \`release\` (\`released_by_id\`);`);
    this.addSql(`create unique index \`release_machine_id_version_unique\` on \`release\` (\`machine_id\`, \`version\`);`);
    this.addSql(`create unique index \`release_machine_id_sequence_unique\` on \`release\` (\`machine_id\`, \`sequence\`);`);

    this.addSql(`create table \`change\` (\`id\` integer not null primary key autoincrement, \`machine_id\` integer not null, \`number\` integer not null, \`title\` text not null, \`reason\` text not null, \`state\` text not null, \`author_id\` integer not null, \`writers\` json not null, \`base_release_id\` integer null, \`text\` text not null, \`concessions\` json not null, \`revision\` integer not null default 1, \`round\` integer not null default 0, \`content_hash\` text null, \`created_at\` datetime not null, \`altered_at\` datetime not null, constraint \`change_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on update cascade, constraint \`change_author_id_foreign\` foreign key(\`author_id\`) references \`person\`(\`id\`) on update cascade, constraint \`change_base_release_id_foreign\` foreign key(\`base_release_id\`) references \`release\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`change_machine_id_index\` on \`change\` (\`machine_id\`);`);
    this.addSql(`create index \`change_author_id_index\` on \`change\` (\`author_id\`);`);
    this.addSql(`create index \`change_base_release_id_index\` on \`change\` (\`base_release_id\`);`);
    this.addSql(`create unique index \`change_machine_id_number_unique\` on \`change\` (\`machine_id\`, \`number\`);`);

    this.addSql(`create table \`draft_point\` (\`id\` integer not null primary key autoincrement, \`change_id\` integer not null, \`number\` integer not null, \`by_id\` integer not null, \`at\` datetime not null, \`text\` text not null, \`edits\` json not null, constraint \`draft_point_change_id_foreign\` foreign key(\`change_id\`) references \`change\`(\`id\`) on update cascade, constraint \`draft_point_by_id_foreign\` foreign key(\`by_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`draft_point_change_id_index\` on \`draft_point\` (\`change_id\`);`);
    this.addSql(`create index \`draft_point_by_id_index\` on \`draft_point\` (\`by_id\`);`);
    this.addSql(`create unique index \`draft_point_change_id_number_unique\` on \`draft_point\` (\`change_id\`, \`number\`);`);

    this.addSql(`create table \`check_report\` (\`id\` integer not null primary key autoincrement, \`change_id\` integer not null, \`inputs_hash\` text not null, \`result\` json not null, \`created_at\` datetime not null, constraint \`check_report_change_id_foreign\` foreign key(\`change_id\`) references \`change\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`check_report_change_id_index\` on \`check_report\` (\`change_id\`);`);
    this.addSql(`create unique index \`check_report_change_id_inputs_hash_unique\` on \`check_report\` (\`change_id\`, \`inputs_hash\`);`);

    this.addSql(`create table \`change_event\` (\`id\` integer not null primary key autoincrement, \`change_id\` integer not null, \`kind\` text not null, \`person_id\` integer null, \`at\` datetime not null, \`note\` text not null, constraint \`change_event_change_id_foreign\` foreign key(\`change_id\`) references \`change\`(\`id\`) on update cascade, constraint \`change_event_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`change_event_change_id_index\` on \`change_event\` (\`change_id\`);`);
    this.addSql(`create index \`change_event_person_id_index\` on \`change_event\` (\`person_id\`);`);

    this.addSql(`create table \`revision\` (\`id\` integer not null primary key autoincrement, \`joint_id\` integer not null, \`number\` integer not null, \`content\` json not null, \`content_hash\` text not null, \`created_at\` datetime not null, constraint \`revision_joint_id_foreign\` foreign key(\`joint_id\`) references \`joint\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`revision_joint_id_index\` on \`revision\` (\`joint_id\`);`);
    this.addSql(`create unique index \`revision_joint_id_number_unique\` on \`revision\` (\`joint_id\`, \`number\`);`);

    this.addSql(`create table \`release_joint\` (\`id\` integer not null primary key autoincrement, \`release_id\` integer not null, \`joint_id\` integer not null, \`revision_id\` integer not null, \`image\` blob not null, \`image_sha256\` text not null, constraint \`release_joint_release_id_foreign\` foreign key(\`release_id\`) references \`release\`(\`id\`) on update cascade, constraint \`release_joint_joint_id_foreign\` foreign key(\`joint_id\`) references \`joint\`(\`id\`) on update cascade, constraint \`release_joint_revision_id_foreign\` foreign key(\`revision_id\`) references \`revision\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`release_joint_release_id_index\` on \`release_joint\` (\`release_id\`);`);
    this.addSql(`create index \`release_joint_joint_id_index\` on \`release_joint\` (\`joint_id\`);`);
    this.addSql(`create index \`release_joint_revision_id_index\` on \`release_joint\` (\`revision_id\`);`);
    this.addSql(`create unique index \`release_joint_release_id_joint_id_unique\` on \`release_joint\` (\`release_id\`, \`joint_id\`);`);

    this.addSql(`create table \`role_grant\` (\`id\` integer not null primary key autoincrement, \`person_id\` integer not null, \`machine_id\` integer null, \`role\` text not null, \`granted_by_id\` integer null, \`granted_at\` datetime not null, \`confirmed_by_id\` integer null, \`confirmed_at\` datetime null, \`ended_at\` datetime null, constraint \`role_grant_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on update cascade, constraint \`role_grant_machine_id_foreign\` foreign key(\`machine_id\`) references \`machine\`(\`id\`) on delete set null on update cascade, constraint \`role_grant_granted_by_id_foreign\` foreign key(\`granted_by_id\`) references \`person\`(\`id\`) on delete set null on update cascade, constraint \`role_grant_confirmed_by_id_foreign\` foreign key(\`confirmed_by_id\`) references \`person\`(\`id\`) on delete set null on update cascade);`);
    this.addSql(`create index \`role_grant_person_id_index\` on \`role_grant\` (\`person_id\`);`);
    this.addSql(`create index \`role_grant_machine_id_index\` on \`role_grant\` (\`machine_id\`);`);
    this.addSql(`create index \`role_grant_granted_by_id_index\` on \`role_grant\` (\`granted_by_id\`);`);
    this.addSql(`create index \`role_grant_confirmed_by_id_index\` on \`role_grant\` (\`confirmed_by_id\`);`);

    this.addSql(`create table \`session\` (\`id_hash\` text not null, \`person_id\` integer null, \`data\` text not null, \`created_at\` datetime not null, \`seen_at\` datetime not null, \`expires_at\` datetime not null, constraint \`session_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on delete set null on update cascade, primary key (\`id_hash\`));`);
    this.addSql(`create index \`session_person_id_index\` on \`session\` (\`person_id\`);`);

    this.addSql(`create table \`signature\` (\`id\` integer not null primary key autoincrement, \`change_id\` integer not null, \`round\` integer not null, \`meaning\` text not null, \`statement\` text not null, \`person_id\` integer not null, \`person_name\` text not null, \`at\` datetime not null, \`content_hash\` text not null, constraint \`signature_change_id_foreign\` foreign key(\`change_id\`) references \`change\`(\`id\`) on update cascade, constraint \`signature_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create index \`signature_change_id_index\` on \`signature\` (\`change_id\`);`);
    this.addSql(`create index \`signature_person_id_index\` on \`signature\` (\`person_id\`);`);

    this.addSql(`create table \`withdrawal\` (\`id\` integer not null primary key autoincrement, \`release_id\` integer not null, \`person_id\` integer not null, \`at\` datetime not null, \`reason\` text not null, constraint \`withdrawal_release_id_foreign\` foreign key(\`release_id\`) references \`release\`(\`id\`) on update cascade, constraint \`withdrawal_person_id_foreign\` foreign key(\`person_id\`) references \`person\`(\`id\`) on update cascade);`);
    this.addSql(`create unique index \`withdrawal_release_id_unique\` on \`withdrawal\` (\`release_id\`);`);
    this.addSql(`create index \`withdrawal_person_id_index\` on \`withdrawal\` (\`person_id\`);`);
  }

}
