/** A kind of mail that a person may do without. */
interface OptionalMail {
  readonly kind: string;
  /** What holds until a person says otherwise. */
  readonly usual: 'on' | 'off';
  /** What it is called beside its switch. */
  readonly name: string;
  /** When it comes. */
  readonly sentence: string;
}

/**
 * Every kind of mail that a person may do without. One line here gives a kind its preference, its switch on the account page, and a name by
 * which letters are sent; every other mail (invitations, links for a new password, word of a changed one) always comes.
 */
export const OPTIONAL_MAILS = [
  {
    kind: 'new-browser',
    usual: 'on',
    name: 'New browser',
    sentence: 'When someone signs in to your account from a browser not used for 30 days.',
  },
  {
    kind: 'role',
    usual: 'on',
    name: 'Your roles',
    sentence: 'When somebody else gives you a role, changes until when you hold it, or ends it.',
  },
  {
    kind: 'mention',
    usual: 'on',
    name: 'Mentions',
    sentence: 'When somebody mentions you in a comment on a candidate.',
  },
  {
    kind: 'out-of-date',
    usual: 'on',
    name: 'Out of date',
    sentence: 'When the numbers of a candidate change that you wrote, signed or are asked to review.',
  },
] as const satisfies readonly OptionalMail[];

export type MailKind = (typeof OPTIONAL_MAILS)[number]['kind'];

/** The same kinds by name alone. */
export const MAIL_KINDS = OPTIONAL_MAILS.map(({ kind }) => kind);
