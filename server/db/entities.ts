import { Receipt } from '../http/receipt.entity.ts'
import { BenchKey } from '../modules/bench-keys/bench-key.entity.ts'
import { BoardEvent } from '../modules/boards/board-event.entity.ts'
import { Board } from '../modules/boards/board.entity.ts'
import { ChangeEvent } from '../modules/changes/change-event.entity.ts'
import { Change } from '../modules/changes/change.entity.ts'
import { DraftPoint } from '../modules/changes/draft-point.entity.ts'
import { CommentAnswer } from '../modules/comments/comment-answer.entity.ts'
import { Comment } from '../modules/comments/comment.entity.ts'
import { CheckReport } from '../modules/checks/check-report.entity.ts'
import { JointAnalysis } from '../modules/checks/joint-analysis.entity.ts'
import { Evidence } from '../modules/evidence/evidence.entity.ts'
import { FirmwareLine } from '../modules/firmware/firmware-line.entity.ts'
import { FirmwareVersion } from '../modules/firmware/firmware-version.entity.ts'
import { WorkplaceKey } from '../modules/keys/workplace-key.entity.ts'
import { LedgerCheckpoint } from '../modules/ledger/ledger-checkpoint.entity.ts'
import { LedgerEntry } from '../modules/ledger/ledger-entry.entity.ts'
import { Bus } from '../modules/machines/bus.entity.ts'
import { DriveTrain } from '../modules/machines/drive-train.entity.ts'
import { Family } from '../modules/machines/family.entity.ts'
import { Joint } from '../modules/machines/joint.entity.ts'
import { Machine } from '../modules/machines/machine.entity.ts'
import { Mail } from '../modules/mail/mail.entity.ts'
import { Link } from '../modules/people/link.entity.ts'
import { Person } from '../modules/people/person.entity.ts'
import { RecoveryCode } from '../modules/people/second-factor/recovery-code.entity.ts'
import { RoleGrant } from '../modules/people/role-grant.entity.ts'
import { SessionRecord } from '../modules/people/session.entity.ts'
import { PolicyVersion } from '../modules/policy/policy-version.entity.ts'
import { ReleaseJoint } from '../modules/releases/release-joint.entity.ts'
import { ReleaseKit } from '../modules/releases/release-kit.entity.ts'
import { Release } from '../modules/releases/release.entity.ts'
import { Revision } from '../modules/releases/revision.entity.ts'
import { Withdrawal } from '../modules/releases/withdrawal.entity.ts'
import { ReadMark } from '../modules/reviews/read-mark.entity.ts'
import { Signature } from '../modules/reviews/signature.entity.ts'

export const entities = [
  BenchKey, Board, BoardEvent, Bus, Change, ChangeEvent, CheckReport, Comment, CommentAnswer, DraftPoint, DriveTrain, Evidence, Family, FirmwareLine, FirmwareVersion, Joint, JointAnalysis, LedgerCheckpoint, LedgerEntry, Link, Machine, Mail,
  Person, PolicyVersion, ReadMark, Receipt, RecoveryCode, Release, ReleaseJoint, ReleaseKit, Revision, RoleGrant, SessionRecord, Signature, Withdrawal, WorkplaceKey,
]

/** Rows of these are written once: a flush that alters one is refused, and so is SQL that goes around the flush (triggers). */
export const immutable = [BoardEvent, ChangeEvent, CheckReport, Comment, CommentAnswer, DraftPoint, DriveTrain, JointAnalysis, LedgerCheckpoint, LedgerEntry, Release, ReleaseJoint, ReleaseKit, Revision, Signature, Withdrawal, WorkplaceKey]
