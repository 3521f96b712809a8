import { Migration } from '@mikro-orm/migrations'

/** Everybody who wrote in a firmware version; of the versions already there, the one who uploaded it. */
export class Migration20261201110743 extends Migration {
  override up(): void {
    this.addSql("alter table `firmware_version` add column `writers` json not null default '[]';")
    this.addSql('update `firmware_version` set `writers` = json_array(`uploaded_by_id`);')
  }

  override down(): void {
    this.addSql('alter table `firmware_version` drop column `writers`;')
  }
}
