import { Migration } from '@mikro-orm/migrations'

/** Results of analyses by the hash of their inputs, each written once. */
export class Migration20261201120731 extends Migration {
  override up(): void {
    this.addSql('create table `joint_analysis` (`hash` text not null, `kind` text not null, `outcome` json not null, `created_at` datetime not null, primary key (`hash`));')
    for (const act of ['update', 'delete']) this.addSql(`create trigger \`joint_analysis_no_${act}\` before ${act} on \`joint_analysis\` begin select raise(abort, 'joint_analysis rows are written once'); end;`)
  }

  override down(): void {
    this.addSql('drop table `joint_analysis`;')
  }
}
