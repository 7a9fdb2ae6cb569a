import { type Actor, parseRoles } from './actor';
import type { App } from './compose';
import type { Db } from './database';
import { notFound } from './errors';

export interface SessionReading {
  /** The person whose session this browser has active. */
  actor: Actor | undefined;
  /** `Set-Cookie` values that the answer must carry, so that the session slides. */
  cookies: string[];
}

/** Someone who is signed in at this browser, beside others. */
export interface SignedIn {
  personId: string;
  name: string;
  roles: Actor['roles'];
  isActive: boolean;
  /** When the session ends unless it is used before: RFC 3339, UTC. */
  sessionUntil: string;
  /** The session's token; it stays inside the server. */
  token: string;
}

/** Finds out who asks, by the session cookie; a deactivated person is nobody. */
export async function readSession(app: App, request: Request): Promise<SessionReading> {
  if (!request.headers.has('cookie')) return { actor: undefined, cookies: [] };
  const { headers, response } = await app.auth.api.getSession({
    headers: request.headers,
    returnHeaders: true,
  });
  const cookies = headers.getSetCookie();
  if (response === null) return { actor: undefined, cookies };
  const actor = await findActor(app.db, response.user.id, response.session.id);
  return { actor, cookies: [...cookies, ...slideSideBySide(cookies, response.session.token)] };
}

/** The acting person by id, as long as they are active. */
export async function findActor(
  db: Db,
  personId: string,
  sessionId: string | undefined,
): Promise<Actor | undefined> {
  const row = await db
    .selectFrom('person')
    .select(['id', 'printed_name', 'roles'])
    .where('id', '=', personId)
    .where('active', '=', 1)
    .executeTakeFirst();
  if (row === undefined) return undefined;
  return { personId: row.id, name: row.printed_name, roles: parseRoles(row.roles), sessionId };
}

/** The acting person by id; throws if they are not there or not active. */
export async function getActor(db: Db, personId: string): Promise<Actor> {
  const actor = await findActor(db, personId, undefined);
  if (actor === undefined) throw notFound('This person');
  return actor;
}

/** Everybody who is signed in at this browser. */
export async function listSignedIn(app: App, request: Request): Promise<SignedIn[]> {
  if (!request.headers.has('cookie')) return [];
  const [active, sessions] = await Promise.all([
    app.auth.api.getSession({ headers: request.headers }),
    app.auth.api.listDeviceSessions({ headers: request.headers }),
  ]);
  if (sessions.length === 0) return [];
  const people = await app.db
    .selectFrom('person')
    .select(['id', 'printed_name', 'roles'])
    .where('active', '=', 1)
    .where(
      'id',
      'in',
      sessions.map(({ user }) => user.id),
    )
    .orderBy('printed_name')
    .execute();
  return people.flatMap((person) => {
    const session = sessions.find(({ user }) => user.id === person.id)?.session;
    if (session === undefined) return [];
    return [
      {
        personId: person.id,
        name: person.printed_name,
        roles: parseRoles(person.roles),
        isActive: active?.user.id === person.id,
        sessionUntil: session.expiresAt.toISOString(),
        token: session.token,
      },
    ];
  });
}

/*
 * The library slides the active session's own cookie but not the twin by which it is one of several at this
 * browser; without this, the twin would run out in the middle of a shift, 30 days after signing in.
 */
function slideSideBySide(cookies: readonly string[], token: string): string[] {
  return cookies
    .map((cookie) => /^((?:__Secure-)?witnessmark\.session_token)=([^;]+)(;.*)$/.exec(cookie))
    .flatMap((match) =>
      match === null ? [] : [`${match[1]}_multi-${token.toLowerCase()}=${match[2]}${match[3]}`],
    );
}
