import { type Outcome, problemOf, valueOf } from '../outcome';
import { canonicalJson, firstOddity } from '../review/canonical';
import { isOfSet, type NumbersOfSet, numbersOf, whyNotSupported } from '../review/claims';
import { differences } from '../review/differences';
import { type Certificate, certificate, CERTIFICATE_FORMAT, type FrozenClaim, type FrozenResults } from './certificate';
import { firstProblem, valueText } from './first-problem';
import { type EarthVelocity, recomputed } from './recompute';
import { type Sha256, signatureSha256 } from './signature-hash';

/** One thing that was looked at in a certificate: a part of it that holds, or a place at which it does not. */
export interface Finding {
  readonly holds: boolean;
  /** Path of the part or the place, such as `snapshot.results.pairs[3].dtNs`. */
  readonly where: string;
  readonly text: string;
}

/** What a certificate is checked with: nothing of it is asked of any server. */
export interface Checker {
  readonly sha256: Sha256;
  readonly earthVelocity: EarthVelocity;
  /** Version of the program that computes again. */
  readonly program: string;
}

const good = (where: string, text: string): Finding => ({ holds: true, where, text });
const bad = (where: string, text: string): Finding => ({ holds: false, where, text });
const shown = (value: unknown): string => (value === undefined ? 'missing' : valueText(value));
const otherThan = (stated: unknown, now: unknown): string => `is stated as ${shown(stated)}; computed again it is ${shown(now)}`;

/** What a schema says that has no words of its own for what would be right. */
const UNSAID = /it must be Invalid (?:input|option): expected /;

function parsedCertificate(text: string): Outcome<unknown> {
  let input: unknown;
  try {
    input = JSON.parse(text);
  } catch {
    return problemOf('certificate-unreadable', '', 'is not JSON; a certificate is one JSON object');
  }
  const head = typeof input === 'object' && input !== null ? input : {};
  const format: unknown = Reflect.get(head, 'format');
  const version: unknown = Reflect.get(head, 'version');
  if (format !== CERTIFICATE_FORMAT)
    return problemOf('certificate-unreadable', 'format', `is ${shown(format)}; a certificate has "${CERTIFICATE_FORMAT}"`);
  if (version !== 1) return problemOf('certificate-unreadable', 'version', `is ${shown(version)}; this program reads version 1`);
  return valueOf(input);
}

function textFinding(text: string, input: unknown): Finding {
  const oddity = firstOddity(text, input);
  if (!oddity) return good('text', 'keys stand in their order and once each, numbers without a digit too many');
  return bad('text', `stands as ${valueText(oddity.found)} where a certificate has ${valueText(oddity.right)}`);
}

function hashFinding(where: string, stated: string, value: unknown, sha256: Sha256): Finding {
  const hash = sha256(canonicalJson(value));
  return hash === stated
    ? good(where, `is what its SHA-256 says: ${hash}`)
    : bad(where, `has the SHA-256 ${hash}, and ${stated} is stated: it is not what was frozen`);
}

function resultFindings({ inputs, results }: Certificate['snapshot'], again: FrozenResults): Finding[] {
  const others = differences(results, again);
  if (others.length > 0) return others.map(({ path, stated, recomputed: now }) => bad(`snapshot.results.${path}`, otherThan(stated, now)));
  const counts = `${again.events.length} events, ${again.frames.length} frames and ${again.pairs.length} pairs`;
  return [good('snapshot.results', `every number of ${counts} comes out again from ${inputs.records.length} readings, to the last digit`)];
}

function claimFindings(claim: FrozenClaim, at: number, set: NumbersOfSet): Finding[] {
  const where = `snapshot.claims[${at}]`;
  const why = claim.state === 'dropped' && isOfSet(set, claim) ? undefined : whyNotSupported(set, claim);
  if (why !== undefined) return [bad(where, `says more than the numbers carry: ${why}`)];
  return differences(claim.numbers, numbersOf(set, claim)).map(({ path, stated, recomputed: now }) =>
    bad(`${where}.numbers.${path}`, otherThan(stated, now)),
  );
}

/** What is wrong with a signature; nothing where it is as it was given. */
function faultOfSignature({ signatures, snapshot, sha256: ofSnapshot }: Certificate, at: number, sha256: Sha256): string | undefined {
  const signature = signatures[at];
  if (!signature) return undefined;
  if (signatureSha256(signature, sha256) !== signature.sha256) return 'is not what its SHA-256 says: it was altered after it was given';
  const before = signatures[at - 1]?.sha256 ?? null;
  if (signature.previousSha256 !== before)
    return `names ${signature.previousSha256 ?? 'none'} as the signature before it, which is ${before ?? 'none'}: one was taken out, put in or moved`;
  const isOfThis = signature.snapshotSha256 === ofSnapshot;
  const beyond = isOfThis && signature.claims.find(({ claim }) => claim > snapshot.claims.length);
  if (beyond) return `decides on claim ${beyond.claim}; there are ${snapshot.claims.length}`;
  if (
    signature.supersededBy !== null &&
    !signatures.slice(at + 1).some((later) => later.sha256 === signature.supersededBy && later.name === signature.name)
  )
    return 'is said to be superseded by a signature that is no later one of its signer';
  return undefined;
}

function signatureFinding(whole: Certificate, at: number, sha256: Sha256): Finding {
  const fault = faultOfSignature(whole, at, sha256);
  if (fault !== undefined) return bad(`signatures[${at}]`, fault);
  const { name, decision, signedAt, snapshotSha256, withdrawnAt, supersededBy } = whole.signatures[at] ?? {
    name: '',
    decision: '',
    signedAt: '',
  };
  const on = snapshotSha256 === whole.sha256 ? 'this snapshot' : `another snapshot (${snapshotSha256 ?? ''})`;
  const since = withdrawnAt ? `, withdrawn ${withdrawnAt}` : supersededBy ? ', superseded since' : '';
  return good(`signatures[${at}]`, `${name}: ${decision} on ${on}, ${signedAt}${since}`);
}

/**
 * Checks a certificate: its hashes, its signatures' chain, every number computed again from the verbatim readings, and each claim against them.
 *
 * @param text of the file
 * @returns what was looked at, with every place that does not hold named (of numbers the first thousand); the problem `certificate-unreadable`
 *   for what is no certificate at all
 */
export function verifyCertificate(text: string, { sha256, earthVelocity, program }: Checker): Outcome<readonly Finding[]> {
  const parsed = parsedCertificate(text);
  if (!parsed.ok) return parsed;
  const formed = certificate.safeParse(parsed.value);
  if (!formed.success) {
    const { where, text: what } = firstProblem(formed.error, parsed.value, 'certificate-form').problem;
    return valueOf([bad(where, what.replace(UNSAID, 'it must be '))]);
  }
  const whole = formed.data;
  const { snapshot } = whole;
  const findings = [
    textFinding(text, parsed.value),
    hashFinding('snapshot', whole.sha256, snapshot, sha256),
    hashFinding('signatures', whole.signaturesSha256, whole.signatures, sha256),
    ...whole.signatures.map((_, at) => signatureFinding(whole, at, sha256)),
  ];
  const again = recomputed(snapshot.inputs, earthVelocity);
  if (!again.ok) return valueOf([...findings, bad(`snapshot.${again.problem.where}`, again.problem.text)]);
  const set = { ...again.value, sigmas: snapshot.inputs.sigmas };
  const numbers = resultFindings(snapshot, again.value);
  const others = snapshot.claims.flatMap((claim, at) => claimFindings(claim, at, set));
  const claims =
    others.length > 0 ? others : [good('snapshot.claims', `${snapshot.claims.length} with their numbers; none says more than these carry`)];
  const isOther = program !== snapshot.program && [...numbers, ...claims].some(({ holds }) => !holds);
  const version = isOther
    ? [bad('snapshot.program', `is ${snapshot.program}, and ${program} computed again: the numbers of two versions may differ`)]
    : [];
  return valueOf([...findings, ...numbers, ...claims, ...version]);
}
