/* Figures that their form lets in and that nothing can have: refused as they are read, and by a correction too. */
import { clearanceFromParts } from './clearance';
import type { EntryData, EntryKind } from './entry';
import type { Verdict } from './job-state';

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** Why these figures can't have been read, whoever says so. */
export function whyImpossible(kind: EntryKind, data: object): Verdict {
  if (kind === 'gauged') {
    const gauged = data as EntryData<'gauged'>;
    if (!(Number(gauged.clearance) > 0)) return no('impossible', 'A clearance is more than nothing.');
    if (Number(gauged.uncertainty) < 0) return no('impossible', 'An uncertainty is not less than nothing.');
    return gauged.by === 'parts' ? whyNotParts(gauged) : whyNotThread(gauged);
  }
  if (kind === 'tightened' && Number((data as EntryData<'tightened'>).value ?? '0') < 0)
    return no('impossible', 'A torque or an angle is not less than nothing.', 'Read it again.');
  return { ok: true };
}

/** A clearance by parts is the sum of its sizes, so that whoever reads it can add them up again. */
function whyNotParts({ clearance, parts }: EntryData<'gauged'>): Verdict {
  if (!parts) return no('parts-missing', 'A clearance by parts names the sizes of its parts.');
  const sizes = { housingBore: 0, upperWall: 0, lowerWall: 0, journal: 0 };
  for (const name of ['housingBore', 'upperWall', 'lowerWall', 'journal'] as const) {
    sizes[name] = Number(parts[name]);
    if (!(sizes[name] > 0)) return no('impossible', 'A part is larger than nothing.', 'Measure it again.');
  }
  return clearanceFromParts(sizes) === Number(clearance)
    ? { ok: true }
    : no('sum-differs', 'The clearance is not the sum of its parts.', 'Add them up again.');
}

function whyNotThread({ threadLot, cardLot }: EntryData<'gauged'>): Verdict {
  return threadLot === undefined || cardLot === undefined
    ? no('lot-missing', 'A thread is read by the lot of its packet and its card.', 'Say which thread it is.')
    : { ok: true };
}
