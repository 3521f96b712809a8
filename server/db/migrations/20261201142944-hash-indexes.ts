import { Migration } from '@mikro-orm/migrations'

/** Contents and images are found by the beginning of their hash from an index. */
export class Migration20261201142944 extends Migration {
  override up(): void {
    this.addSql('create index `release_content_hash_index` on `release` (`content_hash`);')
    this.addSql('create index `change_content_hash_index` on `change` (`content_hash`);')
    this.addSql('create index `revision_content_hash_index` on `revision` (`content_hash`);')
    this.addSql('create index `release_joint_image_sha256_index` on `release_joint` (`image_sha256`);')
  }

  override down(): void {
    for (const table of ['release', 'change', 'revision']) this.addSql(`drop index \`${table}_content_hash_index\`;`)
    this.addSql('drop index `release_joint_image_sha256_index`;')
  }
}
