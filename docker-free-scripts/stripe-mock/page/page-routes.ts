import type { Request, Response } from 'express';
import { Router, urlencoded } from 'express';
import type { Service } from '#stand-ins/stripe-mock/service';
import type { SessionRecord } from '#stand-ins/stripe-mock/state/records';
import { EMPTY_FORM, readCardForm, textsOf } from './card-form.ts';
import type { PayerDesk, PayerStep } from './pay-as-payer.ts';
import { returnUrlOf } from './pay-as-payer.ts';
import type { FormState } from './payment-page.ts';
import { authenticationPage, closedPage, paymentPage, unknownPage } from './payment-page.ts';

const UNTOUCHED: FormState = { texts: EMPTY_FORM, complaints: {}, declined: null };

/** The hosted page: plain forms, no scripts. */
export function pageRoutes(service: Service, desk: PayerDesk): Router {
  const router = Router();
  router.use(urlencoded({ extended: false }));
  router.use((_request, response, next) => {
    response.set({
      'cache-control': 'no-store',
      'content-security-policy': "default-src 'none'; style-src 'unsafe-inline'; frame-ancestors 'none'",
      'referrer-policy': 'no-referrer',
    });
    next();
  });
  const withSession =
    (handle: (request: Request, response: Response, session: SessionRecord) => Promise<void> | void) =>
    async (request: Request, response: Response) => {
      const session = service.store.find('sessions', String(request.params.id));
      if (session === undefined) response.status(404).send(unknownPage());
      else if (session.status !== 'open') response.send(closedPage(session, returnUrlOf(session)));
      else await handle(request, response, session);
    };

  router.get(
    '/pay/:id',
    withSession((_request, response, session) => {
      if (isBeingAuthenticated(service, session)) response.redirect(303, `/pay/${session.id}/authenticate`);
      else response.send(paymentPage(session, { ...UNTOUCHED, declined: lastDecline(service, session) }));
    }),
  );
  router.post(
    '/pay/:id',
    withSession(async (request, response, session) => {
      const texts = textsOf(request.body);
      const form = readCardForm(texts, session.customerEmail !== null, service.clock.nowMs());
      if (!form.ok) {
        response
          .status(422)
          .send(paymentPage(session, { texts, complaints: form.complaints, declined: null }));
        return;
      }
      const step = await desk.confirm(session.id, form.entry);
      goOn(response, session, step, { ...UNTOUCHED, texts });
    }),
  );
  router.get(
    '/pay/:id/authenticate',
    withSession((_request, response, session) => {
      if (isBeingAuthenticated(service, session)) response.send(authenticationPage(session));
      else response.redirect(303, `/pay/${session.id}`);
    }),
  );
  router.post(
    '/pay/:id/authenticate',
    withSession(async (request, response, session) => {
      const answer = (request.body as { answer?: unknown } | undefined)?.answer;
      const step = await desk.answer(session.id, answer === 'approve');
      goOn(response, session, step, UNTOUCHED);
    }),
  );
  return router;
}

function goOn(
  response: Response,
  session: SessionRecord,
  { outcome, sentOn }: PayerStep,
  state: FormState,
): void {
  response.once('close', sentOn);
  switch (outcome.kind) {
    case 'paid':
      response.redirect(303, returnUrlOf(session));
      break;
    case 'must_authenticate':
      response.redirect(303, `/pay/${session.id}/authenticate`);
      break;
    case 'declined':
      response.status(402).send(paymentPage(session, { ...state, declined: outcome.message }));
      break;
    case 'not_open':
      response.redirect(303, `/pay/${session.id}`);
      break;
  }
}

function isBeingAuthenticated(service: Service, session: SessionRecord): boolean {
  return service.store.find('intents', session.paymentIntent)?.status === 'requires_action';
}

/** A payer who comes back to the page finds why the last card was refused. */
function lastDecline(service: Service, session: SessionRecord): string | null {
  return service.store.find('intents', session.paymentIntent)?.lastFailure?.message ?? null;
}
