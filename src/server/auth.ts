import { betterAuth } from 'better-auth';
import { APIError } from 'better-auth/api';
import { multiSession } from 'better-auth/plugins';
import type { Logger } from 'pino';
import { DAY, type Ids, SECOND } from './clock';
import type { Db } from './database';

/** The header in which our own server file says where a request came from; clients' own are stripped there. */
export const CLIENT_ADDRESS_HEADER = 'x-client-address';

/** A session outlasts any shift and slides while its person is at work. */
export const SESSION_DAYS = 30;

export const PASSWORD_MIN = 10;
export const PASSWORD_MAX = 128;

interface AuthParts {
  db: Db;
  secret: string;
  publicUrl: string;
  log: Logger;
  ids: Ids;
}

/** What the sign-in library is told; the test for drift of its tables reads the same. */
export function authOptions({ db, secret, publicUrl, log, ids }: AuthParts) {
  return {
    appName: 'Witnessmark',
    // The same Kysely instance, so that its queries wait for our transactions instead of falling into them.
    database: { db, type: 'sqlite' as const, transaction: false },
    secret,
    baseURL: publicUrl,
    trustedOrigins: [publicUrl],
    emailAndPassword: {
      enabled: true,
      disableSignUp: true,
      minPasswordLength: PASSWORD_MIN,
      maxPasswordLength: PASSWORD_MAX,
    },
    session: {
      expiresIn: (SESSION_DAYS * DAY) / SECOND,
      updateAge: DAY / SECOND,
      cookieCache: { enabled: false },
    },
    rateLimit: {
      enabled: true,
      storage: 'database' as const,
      window: 60,
      max: 100,
      // A whole shift signs in from behind one address; guessing a password of ten characters does not get far.
      customRules: { '/sign-in/email': { window: 60, max: 30 } },
    },
    /*
     * Our own endpoints call what is needed; none of these routes is mounted. They are closed here as well,
     * because each would be a hole if it were: an oracle, a way to rename a signer, a sign-out of everybody.
     */
    disabledPaths: [
      '/sign-up/email',
      '/sign-in/social',
      '/sign-out',
      '/update-user',
      '/update-session',
      '/change-email',
      '/change-password',
      '/delete-user',
      '/delete-user/callback',
      '/verify-password',
      '/verify-email',
      '/send-verification-email',
      '/reset-password',
      '/request-password-reset',
      '/link-social',
      '/unlink-account',
      '/list-accounts',
      '/list-sessions',
      '/revoke-session',
      '/revoke-sessions',
      '/revoke-other-sessions',
      '/get-access-token',
      '/refresh-token',
      '/account-info',
    ],
    plugins: [multiSession({ maximumSessions: 50 })],
    advanced: {
      cookiePrefix: 'witnessmark',
      useSecureCookies: publicUrl.startsWith('https://'),
      ipAddress: { ipAddressHeaders: [CLIENT_ADDRESS_HEADER] },
      database: { generateId: () => ids.next() },
    },
    databaseHooks: {
      session: {
        create: {
          before: async (session: { userId: string }) => {
            const person = await db
              .selectFrom('person')
              .select('active')
              .where('id', '=', session.userId)
              .executeTakeFirst();
            if (person?.active !== 1) throw new APIError('FORBIDDEN', { code: 'DEACTIVATED' });
          },
        },
      },
    },
    telemetry: { enabled: false },
    logger: {
      level: 'error' as const,
      log: (level: 'debug' | 'info' | 'warn' | 'error', message: string) =>
        log[level]({ from: 'sign-in' }, message),
    },
  };
}

/** The sign-in library on the workshop's own database. */
export function makeAuth(parts: AuthParts) {
  return betterAuth(authOptions(parts));
}

export type Auth = ReturnType<typeof makeAuth>;
