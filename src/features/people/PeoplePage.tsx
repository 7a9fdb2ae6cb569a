import { QueryClientProvider, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { DataTable, type DataColumn } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { newQueryClient, useServerList } from '@/offline/use-server';
import { dayIn } from '@/domain/time-words';
import { AddPersonForm } from './AddPersonForm';
import { AuthorisationDialog, SignsBy, type Authorised } from './AuthorisationDialog';
import { LinkNote } from './LinkNote';
import { RolesDialog } from './RolesDialog';
import { Tablets } from './Tablets';
import { linkAnswer, peopleAnswer, type GivenLink, type PersonRow } from './people-answer';

/** The people of the workshop and its tablets: added, given roles, let out; never deleted. */
export function PeoplePage({ zone }: { zone: string }) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <People zone={zone} />
    </QueryClientProvider>
  );
}

function People({ zone }: { zone: string }) {
  const list = useServerList('/api/people', peopleAnswer);
  const people = list.data?.pages.flatMap((page) => page.people);
  const client = useQueryClient();
  const [trouble, setTrouble] = useState<string>();
  const [link, setLink] = useState<GivenLink>();
  const [changing, setChanging] = useState<PersonRow>();
  const [authorising, setAuthorising] = useState<PersonRow>();
  const today = dayIn(zone, new Date().toISOString());
  const change = async (id: string, body: PersonChange) => {
    const path = `/api/people/${id}`;
    const changed = await callServer(offlineOfThisPage(), {
      method: 'PATCH',
      path,
      body,
      answer: z.looseObject({}),
    });
    setTrouble(changed.ok ? undefined : changed.why);
    await client.invalidateQueries();
  };
  const giveLink = async ({ id, name }: PersonRow) => {
    const path = `/api/people/${id}/password-link`;
    const given = await callServer(offlineOfThisPage(), {
      method: 'POST',
      path,
      body: {},
      answer: linkAnswer,
    });
    setTrouble(given.ok ? undefined : given.why);
    if (given.ok) setLink({ name, ...given.body });
  };
  const words = trouble ?? list.error?.message;
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">People</h1>
      </div>
      {words !== undefined && (
        <ErrorNote happened={words} kept="Everybody is as they were." next="Try it again." />
      )}
      {link && <LinkNote link={link} zone={zone} />}
      <DataTable
        caption="The people of the workshop"
        columns={COLUMNS}
        rows={(people ?? []).map((row) => ({
          key: row.id,
          isSoft: !row.active,
          cells: {
            name: (
              <>
                {row.name}
                {row.email !== undefined && <span className="cell-note">{row.email}</span>}
              </>
            ),
            roles: row.roles.join(', '),
            signs: <SignsBy row={row} today={today} />,
            state: stateWords(row),
            acts: (
              <RowActs
                row={row}
                onRoles={() => setChanging(row)}
                onAuthorisation={() => setAuthorising(row)}
                onActive={() => void change(row.id, { active: !row.active })}
                onLink={() => void giveLink(row)}
              />
            ),
          },
        }))}
        emptyWords={people ? 'Nobody yet.' : 'Reading the people'}
      />
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          More people
        </Button>
      )}
      {changing && (
        <RolesDialog
          name={changing.name}
          roles={changing.roles}
          onClose={() => setChanging(undefined)}
          onKeep={(roles) => {
            setChanging(undefined);
            void change(changing.id, { roles });
          }}
        />
      )}
      {authorising && (
        <AuthorisationDialog
          person={authorising}
          onClose={() => setAuthorising(undefined)}
          onKeep={(authorisation) => {
            setAuthorising(undefined);
            void change(authorising.id, { authorisation });
          }}
        />
      )}
      <div className="desk-columns mt-8">
        <section className="part">
          <h2 className="part-title">Add a person</h2>
          <AddPersonForm
            onAdded={(given) => {
              setLink(given);
              void client.invalidateQueries();
            }}
          />
        </section>
        <Tablets zone={zone} />
      </div>
    </>
  );
}

interface PersonChange {
  roles?: string[];
  active?: boolean;
  authorisation?: Authorised;
}

const COLUMNS: DataColumn[] = [
  { key: 'name', label: 'printed name' },
  { key: 'roles', label: 'roles' },
  { key: 'signs', label: 'signs by' },
  { key: 'state', label: 'state', isWide: true },
  { key: 'acts', label: 'change', align: 'right' },
];

function stateWords(row: PersonRow): string {
  if (!row.active) return 'deactivated: can’t sign in, stays in the record';
  const missing = [
    ...(row.hasPassword ? [] : ['no password yet']),
    ...(row.hasPin ? [] : ['no signing PIN yet']),
  ];
  return missing.length === 0 ? 'active' : `active, ${missing.join(', ')}`;
}

interface RowActsProps {
  row: PersonRow;
  onRoles: () => void;
  onAuthorisation: () => void;
  onActive: () => void;
  onLink: () => void;
}

function RowActs({ row, onRoles, onAuthorisation, onActive, onLink }: RowActsProps) {
  return (
    <span className="cell-acts">
      {row.active && (
        <Button look="link" onClick={onRoles} aria-label={`Change the roles of ${row.name}`}>
          Roles
        </Button>
      )}
      {row.active && (
        <Button look="link" onClick={onAuthorisation} aria-label={`Change the authorisation of ${row.name}`}>
          Authorisation
        </Button>
      )}
      {row.active && (
        <Button look="link" onClick={onLink} aria-label={`Give ${row.name} a link to set a password`}>
          Password link
        </Button>
      )}
      <Button
        look="link"
        onClick={onActive}
        aria-label={`${row.active ? 'Deactivate' : 'Let back in'} ${row.name}`}
      >
        {row.active ? 'Deactivate' : 'Let back in'}
      </Button>
    </span>
  );
}
