import { siteKeys } from '#schema/schema';
import { newSiteKey } from '../../backend/accounts/site-key-use';
import { type Db } from '../../backend/db';
import { type SiteSender } from '../../backend/sites-gate/site-desk';
import { insertNetwork, insertRow } from '../support/network-rows';
import { networkFile } from './streamed-server';

const AT = '2020-03-01T00:00:00.000Z';

/** A site of a database, as the desk knows it, and the key that it signs in with. */
export interface KeyedSite extends SiteSender {
  readonly key: string;
}

/** Puts a network with a rule into a database; answers its sites. */
export function makeDiskNetwork(db: Db, siteCount: number): readonly KeyedSite[] {
  const file = networkFile(siteCount);
  const { networkId, siteIds } = insertNetwork(db, file);
  const ruleId = insertRow(db, 'rules', { network_id: networkId, code: file.rule.code, name: '', is_active: 1, created_at: AT });
  const rule = { minimum_fold: file.rule.minimum_fold, sigmas: file.rule.sigmas, window_kind: 'light-time', speed_c: 1, margin_ns: 0 };
  insertRow(db, 'rule_versions', { rule_id: ruleId, number: 1, ...rule, created_at: AT });
  return [...siteIds.values()].map((siteId) => {
    const { key, prefix, hash } = newSiteKey();
    const values = { siteId, label: 'test', prefix, hash, createdAt: AT };
    const { id: keyId } = db.insert(siteKeys).values(values).returning({ id: siteKeys.id }).get();
    return { siteId, networkId, keyId, key };
  });
}
