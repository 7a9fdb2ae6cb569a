import { Resend } from 'resend';
import type { MailSettings } from './settings';

/** One letter in plain text. */
export interface Letter {
  /** The same letter sent twice with one id arrives once. */
  id: string;
  to: string;
  subject: string;
  text: string;
}

/** Why a letter did not leave, and whether trying again can help. */
export interface MailTrouble {
  ok: false;
  words: string;
  isFinal: boolean;
}

/** Hands letters to whoever delivers them. */
export interface Mailer {
  /** Where letters go: to the service, or nowhere but this machine. */
  via: 'service' | 'here';
  /** Never throws for what the service or the network does. */
  send(letter: Letter): Promise<{ ok: true } | MailTrouble>;
}

/** Longer than a slow service takes, shorter than anybody waits. */
const PATIENCE_MS = 20_000;

/** A mailer over the mail service's own SDK; the fake of the service is the same SDK at another address. */
export function serviceMailer({ apiKey, from, baseUrl }: MailSettings, via: Mailer['via']): Mailer {
  const service = new Resend(apiKey, baseUrl === undefined ? {} : { baseUrl });
  return {
    via,
    async send({ id, to, subject, text }) {
      const sending = service.emails.send({ from, to, subject, text }, { idempotencyKey: id });
      const answer = await Promise.race([sending, afterPatience()]);
      if (answer === undefined)
        return { ok: false, words: 'The mail service did not answer.', isFinal: false };
      if (answer.error === null) return { ok: true };
      const { message, statusCode } = answer.error;
      return { ok: false, words: message, isFinal: isFinal(statusCode) };
    },
  };
}

/** A letter that the service will never take; a wrong key, a full quota and a broken service can be mended. */
function isFinal(status: number | null): boolean {
  return status === 400 || status === 422;
}

function afterPatience(): Promise<undefined> {
  return new Promise((resolve) => {
    setTimeout(() => resolve(undefined), PATIENCE_MS).unref();
  });
}
