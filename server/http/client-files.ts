import { randomBytes } from 'node:crypto';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import express, { type RequestHandler, type Router } from 'express';
import helmet from 'helmet';
import type { Config } from '#server/platform/config';

/** One nonce per answer, for the style tags a headless library may write; scripts and everything else come from 'self'. */
export function contentPolicy(config: Config): RequestHandler[] {
  const nonce: RequestHandler = (_req, res, next) => {
    res.locals.nonce = randomBytes(16).toString('base64');
    next();
  };
  const policy = helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'none'"],
        scriptSrc: ["'self'"],
        styleSrc: [
          "'self'",
          (_req, res) => `'nonce-${(res as unknown as { locals: { nonce: string } }).locals.nonce}'`,
        ],
        // React sets style properties through the CSSOM, which the policy allows; attributes stay forbidden.
        imgSrc: ["'self'", 'blob:'],
        fontSrc: ["'self'"],
        connectSrc: ["'self'"],
        frameSrc: ["'self'", 'blob:'],
        formAction: ["'self'"],
        frameAncestors: ["'none'"],
        baseUri: ["'none'"],
        objectSrc: ["'none'"],
        manifestSrc: ["'self'"],
        ...(config.secure ? { upgradeInsecureRequests: [] } : {}),
      },
    },
    strictTransportSecurity: config.secure,
    referrerPolicy: { policy: 'no-referrer' },
    crossOriginOpenerPolicy: { policy: 'same-origin' },
  });
  return [nonce, policy];
}

/** Serves the built client: hashed assets for ever, the page with its nonce for every other path. */
export function serveClient(router: Router, folder: string): void {
  const template = readFileSync(path.join(folder, 'index.html'), 'utf8');
  router.use(
    '/assets',
    express.static(path.join(folder, 'assets'), {
      immutable: true,
      maxAge: '365d',
      index: false,
      fallthrough: false,
    }),
  );
  router.use(express.static(folder, { index: false, maxAge: '1h' }));
  router.get('/{*path}', (_req, res) => {
    res.setHeader('Cache-Control', 'no-store');
    res.type('html').send(template.replaceAll('__CSP_NONCE__', res.locals.nonce as string));
  });
}
