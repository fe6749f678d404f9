import { type SiteCredit } from '#shared/contract/site-socket';

/** How much of records and bytes may be promised. */
export interface CreditLimits {
  /** To all connections together, what waits to be stored included. */
  readonly budget: SiteCredit;
  /** To one connection at most. */
  readonly most: SiteCredit;
  /** To one connection at least, however many there are and however far behind the work is. */
  readonly least: SiteCredit;
}

/** What one connection may still send, and what of it waits to be stored. */
export interface CreditAccount {
  left: SiteCredit;
  waiting: SiteCredit;
}

const NONE: SiteCredit = { records: 0, bytes: 0 };
const sum = (a: SiteCredit, b: SiteCredit): SiteCredit => ({ records: a.records + b.records, bytes: a.bytes + b.bytes });
const less = (a: SiteCredit, b: SiteCredit): SiteCredit => ({ records: a.records - b.records, bytes: a.bytes - b.bytes });
const clamp = (value: number, least: number, most: number): number => Math.max(least, Math.min(most, Math.floor(value)));

/**
 * Grants credit so that what was granted and what waits never exceed a budget: a grant, once made, is never taken back, so that neither side
 * can be wrong about it; when the work is behind, no more is granted than the least.
 */
export class CreditOffice {
  /** Whether what waits to be stored has waited too long. */
  isBehind = false;
  private readonly accounts = new Set<CreditAccount>();
  /** Waits to be stored, of connections that are no more too. */
  private waiting: SiteCredit = NONE;

  constructor(private readonly limits: CreditLimits) {}

  /** Whether more waits than was ever budgeted, as when connections come, send and go without waiting for an answer. */
  get isFull(): boolean {
    const { budget } = this.limits;
    return this.waiting.records > budget.records || this.waiting.bytes > budget.bytes;
  }

  open(): CreditAccount {
    const account = { left: NONE, waiting: NONE };
    this.accounts.add(account);
    return account;
  }

  close(account: CreditAccount): void {
    this.accounts.delete(account);
  }

  /** Takes the cost of a batch from what is left; false when that is not enough, and nothing is taken. */
  spend(account: CreditAccount, cost: SiteCredit): boolean {
    if (cost.records > account.left.records || cost.bytes > account.left.bytes) return false;
    account.left = less(account.left, cost);
    account.waiting = sum(account.waiting, cost);
    this.waiting = sum(this.waiting, cost);
    return true;
  }

  /** A batch no longer waits. */
  settle(account: CreditAccount, cost: SiteCredit): void {
    account.waiting = less(account.waiting, cost);
    this.waiting = less(this.waiting, cost);
  }

  /** Grants what is missing to the connection's share, and adds it to what is left. */
  grant(account: CreditAccount): SiteCredit {
    const granted = {
      records: Math.max(0, this.share('records') - account.left.records - account.waiting.records),
      bytes: Math.max(0, this.share('bytes') - account.left.bytes - account.waiting.bytes),
    };
    account.left = sum(account.left, granted);
    return granted;
  }

  private share(of: keyof SiteCredit): number {
    const { budget, most, least } = this.limits;
    if (this.isBehind) return least[of];
    let owned = 0;
    for (const { waiting } of this.accounts) owned += waiting[of];
    const ofTheGone = this.waiting[of] - owned;
    return clamp((budget[of] - ofTheGone) / Math.max(1, this.accounts.size), least[of], most[of]);
  }
}
