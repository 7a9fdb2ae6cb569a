import type { PersonRow } from '@db/tables';
import type { Certificate } from '@/domain/certificate';
import { type Actor, requireRole } from './actor';
import type { Clock, Ids } from './clock';
import type { Trx } from './database';
import { notFound } from './errors';
import { appendWorkshopEntry } from './workshop-trail';

/** By what somebody signs, and the last day on which it counts. */
export interface KeptAuthorisation {
  certificate: Certificate | null;
  authorisedUntil: string | null;
}

/** Says by which certificate somebody signs and until when; what they signed before stays as it was. */
export async function setAuthorisation(
  trx: Trx,
  actor: Actor,
  id: string,
  authorisation: KeptAuthorisation,
  making: { clock: Clock; ids: Ids },
): Promise<void> {
  requireRole(actor, 'owner');
  const row = await trx.selectFrom('person').selectAll().where('id', '=', id).executeTakeFirst();
  if (row === undefined) throw notFound('This person');
  if (isSame(toAuthorisation(row), authorisation)) return;
  const { certificate, authorisedUntil } = authorisation;
  await trx
    .updateTable('person')
    .set({
      certificate_number: certificate?.number ?? null,
      certificate_kind: certificate?.kind ?? null,
      authorised_until: authorisedUntil,
    })
    .where('id', '=', id)
    .execute();
  const kept = certificate && { number: certificate.number, kind: certificate.kind };
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'authorisation-changed', data: { person: id, certificate: kept, authorisedUntil } },
    making,
  );
}

/** What a person's row says of it. */
export function toAuthorisation(
  row: Pick<PersonRow, 'certificate_number' | 'certificate_kind' | 'authorised_until'>,
): KeptAuthorisation {
  const { certificate_number: number, certificate_kind: kind } = row;
  return {
    certificate: number === null || kind === null ? null : { number, kind },
    authorisedUntil: row.authorised_until,
  };
}

function isSame(one: KeptAuthorisation, other: KeptAuthorisation): boolean {
  return (
    one.authorisedUntil === other.authorisedUntil &&
    one.certificate?.number === other.certificate?.number &&
    one.certificate?.kind === other.certificate?.kind
  );
}
