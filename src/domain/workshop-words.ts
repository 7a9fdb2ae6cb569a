/*
 * The workshop's own trail in words. Its entries name people, tablets and tools by id; whoever reads the trail
 * from its beginning knows their names, as they were at each entry.
 */

/** An entry of the workshop's trail as the server recorded it. */
export interface WorkshopRecord {
  seq: number;
  kind: string;
  by: string;
  author: { name: string; roles: readonly string[] };
  at: string;
  recordedAt: string;
  prev: string;
  data: Readonly<Record<string, unknown>>;
}

/** What an entry is about, to read one sort of entry alone. */
export type WorkshopTopic = 'people' | 'tablets' | 'tools' | 'documents' | 'jobs' | 'record';

/** A line of the workshop's trail. */
export interface WorkshopLine {
  seq: number;
  at: string;
  who: string;
  topic: WorkshopTopic;
  words: string;
}

/** Every entry in words, in order from the first. */
export function workshopLines(entries: readonly WorkshopRecord[]): WorkshopLine[] {
  const names = new Map<string, string>();
  return entries.map((entry) => {
    learn(names, entry.data);
    const words = wordsOf(entry, names);
    const topic = TOPICS[entry.kind] ?? 'record';
    return { seq: entry.seq, at: entry.at, who: entry.author.name, topic, words };
  });
}

const TOPICS: Readonly<Record<string, WorkshopTopic>> = {
  'person-added': 'people',
  'person-renamed': 'people',
  'roles-changed': 'people',
  'authorisation-changed': 'people',
  'person-deactivated': 'people',
  'person-reactivated': 'people',
  'pin-set': 'people',
  'tablet-enrolled': 'tablets',
  'tablet-renamed': 'tablets',
  'tablet-lost': 'tablets',
  'tablet-found': 'tablets',
  'tablet-file-brought': 'tablets',
  'key-enrolled': 'tablets',
  'key-revoked': 'tablets',
  'tool-added': 'tools',
  'tool-changed': 'tools',
  'tool-withdrawn': 'tools',
  'tool-returned': 'tools',
  'calibration-recorded': 'tools',
  'document-released': 'documents',
  'document-withdrawn': 'documents',
  'job-opened': 'jobs',
  exported: 'jobs',
  erased: 'jobs',
};

/** What an entry says about names; a number of a job counts as one. */
function learn(names: Map<string, string>, data: WorkshopRecord['data']): void {
  const name = text(data.to) ?? text(data.name);
  for (const id of [data.person, data.tablet, data.tool]) {
    if (typeof id === 'string' && name !== undefined && name !== '') names.set(id, name);
  }
  const [job, number] = [text(data.job), text(data.number)];
  if (job !== undefined && number !== undefined) names.set(job, number);
}

function wordsOf({ kind, data }: WorkshopRecord, names: ReadonlyMap<string, string>): string {
  const named = (id: unknown): string => names.get(String(id)) ?? String(id).slice(0, 8);
  switch (kind) {
    case 'workshop-set':
      return `The workshop is called ${text(data.name) ?? ''}, its clock ${text(data.zone) ?? ''}`;
    case 'second-units-changed':
      return data.shown === 'none'
        ? 'The Floor shows SI alone from here on'
        : 'The Floor shows inch and pound beside SI from here on';
    case 'witness-address-changed':
      return data.address === 'set'
        ? 'Signed heads are mailed to a witness address from here on'
        : 'Signed heads are mailed nowhere from here on';
    case 'workshop-key-renewed':
      return `The workshop signs with key ${String(data.key).slice(0, 16)} from here on, vouched for by ${String(data.before).slice(0, 16)}, the one before it`;
    case 'person-added':
      return `${named(data.person)} added as ${list(data.roles)}`;
    case 'person-renamed':
      return `${text(data.from) ?? ''} is called ${text(data.to) ?? ''} from here on`;
    case 'roles-changed':
      return `${named(data.person)}: ${list(data.from)} became ${list(data.to)}`;
    case 'authorisation-changed':
      return `${named(data.person)}: ${authorisationWords(data)}`;
    case 'person-deactivated':
      return `${named(data.person)} let out`;
    case 'person-reactivated':
      return `${named(data.person)} let in again`;
    case 'pin-set':
      return `${named(data.person)} set a signing PIN`;
    case 'tablet-enrolled':
      return `Tablet enrolled: ${named(data.tablet)}${again(data.afterRestore, ', again')}`;
    case 'tablet-renamed':
      return `Tablet ${text(data.from) ?? ''} is called ${text(data.to) ?? ''} from here on`;
    case 'tablet-lost':
      return `Tablet ${named(data.tablet)} declared lost${because(data.reason)}`;
    case 'tablet-found':
      return `Tablet ${named(data.tablet)} found again`;
    case 'tablet-file-brought':
      return `File of tablet ${named(data.tablet)} brought in: ${String(data.recorded)} recorded, ${String(data.refused)} refused`;
    case 'key-enrolled':
      return `Key ${text(data.key) ?? ''} of ${named(data.person)} on ${named(data.tablet)}${again(data.afterRestore, ', enrolled again')}`;
    case 'key-revoked':
      return `Key ${text(data.key) ?? ''} of ${named(data.person)} on ${named(data.tablet)} revoked`;
    default:
      return toolWords(kind, data, named) ?? recordWords(kind, data, named);
  }
}

type Named = (id: unknown) => string;

function toolWords(kind: string, data: WorkshopRecord['data'], named: Named): string | undefined {
  const serial = text(data.serial) ?? '';
  switch (kind) {
    case 'tool-added':
      return `${text(data.name) ?? 'Tool'}, serial ${serial}, added${due(data.dueOn)}`;
    case 'tool-changed':
      return `${named(data.tool)}: ${changes(data.from, data.to)}`;
    case 'tool-withdrawn':
      return `${named(data.tool)}, serial ${serial}, withdrawn`;
    case 'tool-returned':
      return `${named(data.tool)}, serial ${serial}, back in use`;
    case 'calibration-recorded':
      return `${named(data.tool)}, serial ${serial}, calibrated on ${text(data.on) ?? ''}${calibrationWords(data)}, certificate ${text(data.certificate) ?? ''}`;
    default:
      return undefined;
  }
}

function recordWords(kind: string, data: WorkshopRecord['data'], named: Named): string {
  switch (kind) {
    case 'document-released':
      return `${documentKind(data.documentKind)} ${text(data.document) ?? ''}, revision ${String(data.revision)}, released`;
    case 'document-withdrawn':
      return `${documentKind(data.documentKind)} ${text(data.document) ?? ''}, revision ${String(data.revision)}, withdrawn`;
    case 'job-opened':
      return `Job ${named(data.job)} opened`;
    case 'head-signed':
      return `Head signed: job ${named(data.trail)}, entry ${String(data.seq)}`;
    case 'exported':
      return `Trail of job ${named(data.job)} saved as a file, ${String(data.entries)} entries`;
    case 'erased':
      return `Personal data of job ${named(data.job)} erased`;
    case 'restored':
      return data.backupMadeAt === undefined
        ? 'A number that a restore took back, made up so that none is missing'
        : `Restored from the backup of ${text(data.backupMadeAt) ?? ''}`;
    default:
      return kind;
  }
}

function text(value: unknown): string | undefined {
  return typeof value === 'string' ? value : undefined;
}

function list(value: unknown): string {
  return Array.isArray(value) && value.length > 0 ? value.map(String).join(', ') : 'nobody';
}

function again(restoredAt: unknown, words: string): string {
  return typeof restoredAt === 'string' ? `${words} after the restore of ${restoredAt}` : '';
}

function because(reason: unknown): string {
  return typeof reason === 'string' ? `: ${reason}` : '';
}

function due(day: unknown): string {
  return typeof day === 'string' ? `, due ${day}` : '';
}

/** By which certificate somebody signs from then on, and until when. */
function authorisationWords({ certificate, authorisedUntil }: WorkshopRecord['data']): string {
  const { number, kind } = (certificate ?? {}) as { number?: unknown; kind?: unknown };
  const by =
    number === undefined
      ? 'signs without a certificate'
      : `signs by certificate ${shown(number)}, ${shown(kind)}`;
  return typeof authorisedUntil === 'string' ? `${by}, until ${authorisedUntil}` : by;
}

/** One that failed moved no date. */
function calibrationWords({ verdict, dueOn, reasons }: WorkshopRecord['data']): string {
  if (verdict === 'failed')
    return `: failed, ${Array.isArray(reasons) ? reasons.map(String).join('; ') : ''}`;
  return `${verdict === 'passed' ? ': passed' : ''}${due(dueOn)}`;
}

/** The fields that differ, as "range high 100, was 120". */
function changes(from: unknown, to: unknown): string {
  const [before, after] = [from, to].map((value) =>
    typeof value === 'object' && value !== null ? (value as Record<string, unknown>) : {},
  );
  return Object.keys(after ?? {})
    .filter((field) => JSON.stringify(before?.[field]) !== JSON.stringify(after?.[field]))
    .map((field) => `${plain(field)} ${shown(after?.[field])}, was ${shown(before?.[field])}`)
    .join('; ');
}

function plain(field: string): string {
  return field.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`);
}

function shown(value: unknown): string {
  if (value === null || value === undefined) return 'none';
  return typeof value === 'string' ? value : JSON.stringify(value);
}

/** "Engine sheet", "Procedure", "Route": the three kinds of document, at the beginning of a line. */
function documentKind(kind: unknown): string {
  if (kind === 'engine') return 'Engine sheet';
  const word = text(kind) ?? 'document';
  return `${word.slice(0, 1).toUpperCase()}${word.slice(1)}`;
}
