import { type MailKind } from '#shared/contract/mail-kinds';
import { letterBody, type Passage } from './letter-body';

/** A letter before it is a mail. */
export interface Letter {
  /** What was sent, for the log and for whether its person wants it; the log has never the text, which may hold a link. */
  readonly kind: 'invitation' | 'reset' | 'password-changed' | MailKind;
  readonly personId: number;
  readonly to: string;
  readonly subject: string;
  readonly text: string;
  readonly html: string;
}

/** Whom a letter is for. */
export interface Receiver {
  readonly personId: number;
  readonly email: string;
  readonly name: string;
}

/** The page of an invitation. The token stands behind '#', which browsers send to no server, in no header and into no log. */
export const invitationLink = (origin: string, token: string): string => `${origin}/invitation#${token}`;

/** The page for a new password, likewise. */
export const resetLink = (origin: string, token: string): string => `${origin}/new-password#${token}`;

/** A letter, which begins with the name of whom it is for. */
export const letter = (
  kind: Letter['kind'],
  { personId, email, name }: Receiver,
  subject: string,
  passages: readonly Passage[],
): Letter => ({ kind, personId, to: email, subject, ...letterBody(subject, [`${name},`, ...passages]) });

/** Invites someone who has no password yet. */
export const invitation = (receiver: Receiver, link: string): Letter =>
  letter('invitation', receiver, 'Invitation to Skewline', [
    'you were given an account at Skewline, where a detector network reconciles its trigger logs. Choose a password here, within 72 hours:',
    { page: link },
    'The link works once. A newer invitation makes it void. If you did not expect this, do nothing.',
  ]);

/** Lets someone choose a new password. */
export const reset = (receiver: Receiver, link: string): Letter =>
  letter('reset', receiver, 'A new password for Skewline', [
    'someone, probably you, asked to choose a new password for your account at Skewline. Choose it here, within 30 minutes:',
    { page: link },
    'The link works once, and the new password signs you out everywhere. If you did not ask for this, do nothing: your password stays as it is.',
  ]);
