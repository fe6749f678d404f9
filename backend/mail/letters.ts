/** A letter before it is a mail. */
export interface Letter {
  /** For the log: what was sent, to which person; never the text, which may hold a link. */
  readonly kind: 'invitation' | 'reset';
  readonly personId: number;
  readonly to: string;
  readonly subject: string;
  readonly text: string;
}

interface Receiver {
  readonly personId: number;
  readonly email: string;
  readonly name: string;
}

/** The page of an invitation. The token stands behind '#', which browsers send to no server, in no header and into no log. */
export const invitationLink = (origin: string, token: string): string => `${origin}/invitation#${token}`;

/** The page for a new password, likewise. */
export const resetLink = (origin: string, token: string): string => `${origin}/new-password#${token}`;

/** Invites someone who has no password yet. */
export const invitation = ({ personId, email, name }: Receiver, link: string): Letter => ({
  kind: 'invitation',
  personId,
  to: email,
  subject: 'Invitation to Skewline',
  text: `${name},

you were given an account at Skewline, where a detector network reconciles its trigger logs. Choose a password here, within 72 hours:

${link}

The link works once. A newer invitation makes it void. If you did not expect this, do nothing.
`,
});

/** Lets someone choose a new password. */
export const reset = ({ personId, email, name }: Receiver, link: string): Letter => ({
  kind: 'reset',
  personId,
  to: email,
  subject: 'A new password for Skewline',
  text: `${name},

someone, probably you, asked to choose a new password for your account at Skewline. Choose it here, within 30 minutes:

${link}

The link works once, and the new password signs you out everywhere. If you did not ask for this, do nothing: your password stays as it is.
`,
});
