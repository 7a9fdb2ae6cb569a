import type { ColumnType, Generated, Insertable, Selectable } from 'kysely';

/*
 * The row of every table, as SQLite holds it: snake_case, JSON as text, times as RFC 3339 UTC text, yes/no as
 * 1/0. Only `src/server` and `db` see these; each noun turns its rows into domain values once.
 */

type Fixed<T> = ColumnType<T, T, never>;

export interface Database {
  user: UserTable;
  session: SessionTable;
  account: AccountTable;
  verification: VerificationTable;
  rateLimit: RateLimitTable;
  setting: SettingTable;
  person: PersonTable;
  attempt_count: AttemptCountTable;
  one_time_link: OneTimeLinkTable;
  device: DeviceTable;
  author_key: AuthorKeyTable;
  signing_pin: SigningPinTable;
  pin_attempt: PinAttemptTable;
  workshop_entry: WorkshopEntryTable;
  signed_head: SignedHeadTable;
  tool: ToolTable;
  calibration: CalibrationTable;
  document_revision: DocumentRevisionTable;
  plan: PlanTable;
  job: JobTable;
  job_identity: JobIdentityTable;
  job_person: JobPersonTable;
  job_entry: JobEntryTable;
  refused_entry: RefusedEntryTable;
  job_fold: JobFoldTable;
  photo: PhotoTable;
  mail: MailTable;
}

export interface UserTable {
  id: Fixed<string>;
  name: string;
  email: string;
  emailVerified: number;
  image: string | null;
  createdAt: string;
  updatedAt: string;
}

export interface SessionTable {
  id: Fixed<string>;
  expiresAt: string;
  token: string;
  createdAt: string;
  updatedAt: string;
  ipAddress: string | null;
  userAgent: string | null;
  userId: string;
}

export interface AccountTable {
  id: Fixed<string>;
  accountId: string;
  providerId: string;
  userId: string;
  accessToken: string | null;
  refreshToken: string | null;
  idToken: string | null;
  accessTokenExpiresAt: string | null;
  refreshTokenExpiresAt: string | null;
  scope: string | null;
  password: string | null;
  createdAt: string;
  updatedAt: string;
}

export interface VerificationTable {
  id: Fixed<string>;
  identifier: string;
  value: string;
  expiresAt: string;
  createdAt: string;
  updatedAt: string;
}

export interface RateLimitTable {
  id: Fixed<string>;
  key: string;
  count: number;
  lastRequest: number;
}

export interface SettingTable {
  key: Fixed<string>;
  value: string;
}

export interface PersonTable {
  id: Fixed<string>;
  printed_name: string;
  email: string;
  roles: string;
  active: number;
  created_at: Fixed<string>;
  deactivated_at: string | null;
  certificate_number: string | null;
  certificate_kind: string | null;
  authorised_until: string | null;
}

export interface AttemptCountTable {
  key: Fixed<string>;
  failed: number;
  since: string;
}

export interface OneTimeLinkTable {
  token_hash: Fixed<string>;
  purpose: Fixed<'first owner' | 'set password'>;
  person_id: Fixed<string | null>;
  created_at: Fixed<string>;
  expires_at: string;
  used_at: string | null;
}

export interface DeviceTable {
  id: Fixed<string>;
  name: string;
  credential_hash: string;
  enrolled_by: string;
  enrolled_at: Fixed<string>;
  state: 'active' | 'lost';
  last_heard_at: string | null;
}

export interface AuthorKeyTable {
  id: Fixed<string>;
  person_id: Fixed<string>;
  device_id: Fixed<string>;
  public_key: Fixed<string>;
  enrolled_at: Fixed<string>;
  workshop_seq: Fixed<number>;
  revoked_at: string | null;
}

export interface SigningPinTable {
  person_id: Fixed<string>;
  hash: string;
  salt: string;
  params: string;
  failed: number;
  locked_until: string | null;
  set_at: string;
}

export interface PinAttemptTable {
  id: Fixed<string>;
  person_id: Fixed<string>;
  at: Fixed<string>;
  outcome: 'right' | 'wrong' | 'locked';
  purpose: Fixed<string>;
  device_id: Fixed<string | null>;
}

export interface WorkshopEntryTable {
  seq: Fixed<number>;
  id: Fixed<string>;
  kind: Fixed<string>;
  /** None for an entry that the server makes for the record itself. */
  by_person: Fixed<string | null>;
  at: Fixed<string>;
  body: Fixed<string>;
  content_hash: Fixed<string>;
  hash: Fixed<string>;
}

export interface SignedHeadTable {
  trail: Fixed<string>;
  seq: Fixed<number>;
  hash: Fixed<string>;
  at: Fixed<string>;
  key: Fixed<string>;
  signature: Fixed<string>;
}

export interface ToolTable {
  id: Fixed<string>;
  name: string;
  kind: string;
  serial: string;
  range_low: string | null;
  range_high: string | null;
  unit: string | null;
  due_on: string | null;
  state: 'in use' | 'withdrawn';
  cycle_limit: number | null;
  cycles_used: Generated<number>;
  torque_type: 'I' | 'II' | null;
  torque_class: 'A' | 'B' | 'C' | 'D' | 'E' | 'F' | 'G' | null;
  failure: string | null;
}

export interface CalibrationTable {
  id: Fixed<string>;
  tool_id: Fixed<string>;
  on: Fixed<string>;
  due_on: Fixed<string>;
  certificate: Fixed<string>;
  readings: Fixed<string>;
  by_person: Fixed<string>;
  verdict: Fixed<'passed' | 'failed' | 'not judged'>;
  reasons: Fixed<string>;
}

export interface DocumentRevisionTable {
  kind: Fixed<'engine' | 'procedure' | 'route'>;
  id: Fixed<string>;
  revision: Fixed<number>;
  hash: string;
  text: string;
  body: string;
  state: 'draft' | 'in review' | 'released' | 'withdrawn';
  written_by: string;
  written_at: string;
  released_by: string | null;
  released_at: string | null;
  withdrawn_by: string | null;
  withdrawn_at: string | null;
  stops_jobs: Generated<number>;
}

export interface PlanTable {
  hash: Fixed<string>;
  body: Fixed<string>;
  created_at: Fixed<string>;
}

export interface JobTable {
  id: Fixed<string>;
  number: Fixed<string>;
  plan_hash: string;
  route_id: Fixed<string>;
  state: 'open' | 'parked' | 'handed over' | 'ended';
  opened_by: Fixed<string>;
  opened_at: Fixed<string>;
  promised_on: string | null;
  note: string | null;
  vehicle_label: string;
}

export interface JobIdentityTable {
  job_id: Fixed<string>;
  field: Fixed<string>;
  value: string;
  salt: string;
}

export interface JobPersonTable {
  job_id: Fixed<string>;
  person_id: Fixed<string>;
}

export interface JobEntryTable {
  job_id: Fixed<string>;
  seq: Fixed<number>;
  id: Fixed<string>;
  kind: Fixed<string>;
  step: Fixed<string | null>;
  by_person: Fixed<string | null>;
  device_id: Fixed<string | null>;
  device_seq: Fixed<number>;
  at: Fixed<string>;
  recorded_at: Fixed<string>;
  body: Fixed<string>;
  content_hash: Fixed<string>;
  hash: Fixed<string>;
  signature: Fixed<string | null>;
  key_id: Fixed<string | null>;
}

export interface RefusedEntryTable {
  id: Fixed<string>;
  entry_id: Fixed<string | null>;
  job_id: Fixed<string | null>;
  device_id: Fixed<string | null>;
  device_seq: Fixed<number | null>;
  content_hash: Fixed<string | null>;
  body: Fixed<string>;
  code: Fixed<string>;
  message: Fixed<string>;
  at: Fixed<string>;
  by_person: Fixed<string | null>;
}

export interface JobFoldTable {
  job_id: Fixed<string>;
  seq: number;
  head_hash: string;
  state: string;
}

export interface PhotoTable {
  hash: Fixed<string>;
  bytes: Fixed<number>;
  type: Fixed<string>;
  stored_at: Fixed<string>;
  uploaded_by_device: Fixed<string | null>;
}

export type PersonRow = Selectable<PersonTable>;
export type DeviceRow = Selectable<DeviceTable>;
export type ToolRow = Selectable<ToolTable>;
export type CalibrationRow = Selectable<CalibrationTable>;
export type SigningPinRow = Selectable<SigningPinTable>;
export interface MailTable {
  id: Fixed<string>;
  job_id: Fixed<string | null>;
  purpose: Fixed<'head to witness' | 'heads of the day' | 'handover to customer' | 'trial'>;
  address: Fixed<string>;
  subject: Fixed<string>;
  body: Fixed<string>;
  made_at: Fixed<string>;
  state: 'waiting' | 'sent' | 'failed';
  attempts: number;
  next_at: string;
  sent_at: string | null;
  via: 'service' | 'here' | null;
  trouble: string | null;
}

export type MailRow = Selectable<MailTable>;
export type NewJobEntryRow = Insertable<JobEntryTable>;
