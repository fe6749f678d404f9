import jwt from 'jsonwebtoken';
import * as z from 'zod';
import { type Ground } from '../ground';

/** How long an access token holds, in seconds. What it claims is looked up at each use, so this only bounds how long a copy is of use. */
export const ACCESS_S = 10 * 60;

const ALGORITHM = 'HS256';
const TYPE = 'at+jwt'; // RFC 9068
const AUDIENCE = 'skewline-api';

/** The session that a token claims, and whose it is. */
export interface Claimed {
  readonly personId: number;
  readonly sessionId: number;
}

type Sources = Pick<Ground, 'signingKey' | 'deploymentId' | 'nowMs'>;

const header = z.object({ alg: z.literal(ALGORITHM), typ: z.literal(TYPE) });
const claims = z.strictObject({
  sub: z.string().regex(/^[1-9]\d{0,14}$/),
  sid: z.int().positive(),
  iss: z.string(),
  aud: z.literal(AUDIENCE),
  iat: z.int(),
  exp: z.int(),
});

/** A new access token of a session (a JWT, signed by HS256). */
export function writeAccess({ personId, sessionId }: Claimed, { signingKey, deploymentId, nowMs }: Sources): string {
  const nowS = Math.floor(nowMs() / 1000);
  const payload: jwt.JwtPayload = {
    sub: String(personId),
    sid: sessionId,
    iss: deploymentId,
    aud: AUDIENCE,
    iat: nowS,
    exp: nowS + ACCESS_S,
  };
  return jwt.sign(payload, signingKey, { algorithm: ALGORITHM, header: { alg: ALGORITHM, typ: TYPE } });
}

/**
 * What an access token claims.
 *
 * @param token as it came; undefined where none did
 * @returns undefined unless it is of the one algorithm, type, issuer and audience, signed by our key, begun, not ended, and no longer than
 * such tokens are
 */
export function readAccess(token: string | undefined, { signingKey, deploymentId, nowMs }: Sources): Claimed | undefined {
  if (token === undefined) return undefined;
  const nowS = Math.floor(nowMs() / 1000);
  try {
    const { header: said, payload } = jwt.verify(token, signingKey, {
      algorithms: [ALGORITHM],
      issuer: deploymentId,
      audience: AUDIENCE,
      clockTimestamp: nowS,
      complete: true,
    });
    header.parse(said);
    const { sub, sid, iat, exp } = claims.parse(payload);
    if (iat > nowS || exp <= nowS || exp - iat > ACCESS_S) return undefined;
    return { personId: Number(sub), sessionId: sid };
  } catch (fault) {
    if (fault instanceof jwt.JsonWebTokenError || fault instanceof z.ZodError) return undefined;
    throw fault;
  }
}
