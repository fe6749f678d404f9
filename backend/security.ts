import { randomBytes } from 'node:crypto';
import { type ServerResponse } from 'node:http';
import { type RequestHandler } from 'express';
import helmet from 'helmet';

const NONCE_BYTES = 16;
const HSTS_S = 365 * 24 * 3600;

/** What a page of ours may ask of the browser's devices: nothing. */
const PERMISSIONS = [
  ...['accelerometer', 'autoplay', 'camera', 'display-capture', 'encrypted-media', 'fullscreen', 'geolocation', 'gyroscope', 'hid'],
  ...[
    'magnetometer',
    'microphone',
    'midi',
    'payment',
    'publickey-credentials-get',
    'screen-wake-lock',
    'serial',
    'usb',
    'xr-spatial-tracking',
  ],
]
  .map((feature) => `${feature}=()`)
  .join(', ');

const nonces = new WeakMap<ServerResponse, string>();

/** The random word of one answer that marks its own style elements; it is made when it is first asked for. */
export function nonceOf(res: ServerResponse): string {
  const known = nonces.get(res);
  if (known !== undefined) return known;
  const nonce = randomBytes(NONCE_BYTES).toString('base64');
  nonces.set(res, nonce);
  return nonce;
}

/**
 * The headers of every answer. Scripts come from this server alone and none is inline; style elements carry the answer's own nonce, which
 * Angular writes them with; text becomes markup only through Angular's own policy (Trusted Types); no other site may frame or embed us.
 *
 * @param production whether browsers are told to come by https alone
 */
export function securityHeaders(production: boolean): RequestHandler[] {
  return [
    (_req, res, next) => {
      res.setHeader('Permissions-Policy', PERMISSIONS);
      next();
    },
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          baseUri: ["'self'"],
          connectSrc: ["'self'"],
          fontSrc: ["'self'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
          imgSrc: ["'self'"],
          scriptSrc: ["'self'"],
          scriptSrcAttr: ["'none'"],
          styleSrc: ["'self'", (_req, res) => `'nonce-${nonceOf(res)}'`],
          requireTrustedTypesFor: ["'script'"],
          trustedTypes: ['angular'],
        },
      },
      crossOriginOpenerPolicy: { policy: 'same-origin' },
      crossOriginResourcePolicy: { policy: 'same-origin' },
      referrerPolicy: { policy: 'no-referrer' },
      xFrameOptions: { action: 'deny' },
      // Over plain http a browser would be sent to a port that does not speak https.
      strictTransportSecurity: production && { maxAge: HSTS_S, includeSubDomains: false },
    }),
  ];
}
