import {
  acceptMyQuote,
  getMyCheckout,
  getMyQuote,
  getMyQuotePdf,
  getMyReceipt,
  openLink,
  startMyCheckout,
} from '#contract/portal';
import { type DocumentMakers, documentFor } from '#server/features/documents/index';
import {
  attemptByKey,
  type PaymentDeps,
  receiptOf,
  reconcileCheckout,
  startCheckout,
} from '#server/features/payments/index';
import { acceptQuote } from '#server/features/quotes/index';
import { type BoundRoute, route } from '#server/http/route';
import type { PatientActor } from '#server/platform/actor';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { LINK_COOKIE, openPatientLink } from './patient-link.ts';
import { checkoutView, readPatientQuote } from './patient-quote-read.ts';

/** The patient's own pages, reached by the secret link alone. */
export function portalRoutes(deps: PaymentDeps, makers: DocumentMakers): BoundRoute[] {
  return [
    route(openLink, async ({ body, raw }) => {
      const { expiresAt } = await openPatientLink(deps, body.token);
      raw.res.cookie(LINK_COOKIE, body.token, {
        httpOnly: true,
        sameSite: 'lax',
        secure: deps.config.secure,
        path: '/',
        expires: new Date(expiresAt),
      });
      return { opened: true as const, expiresAt };
    }),
    route(getMyQuote, async ({ actor }) => await readPatientQuote(deps, actor)),
    route(acceptMyQuote, async ({ body, actor }) => {
      await inTransaction(deps.db, (trx) =>
        acceptQuote(trx, deps, { quoteId: actor.quoteId, ...body, channel: 'link', actor }),
      );
      return await readPatientQuote(deps, actor);
    }),
    route(startMyCheckout, async ({ body, actor }) => {
      const { courseId, email } = await courseOfPatient(deps, actor);
      const attempt = await startCheckout(deps, {
        courseId,
        ...body,
        returnUrl: `${deps.config.publicUrl}/my-quote`,
        email,
        actor,
      });
      return checkoutView(attempt);
    }),
    route(getMyCheckout, async ({ params, actor }) => {
      const { courseId } = await courseOfPatient(deps, actor);
      const attempt = await attemptByKey(deps.db, params.attemptKey);
      if (!attempt || attempt.courseId !== courseId) throw notFound('payment');
      if (attempt.sessionId === null || attempt.state === 'paid') return checkoutView(attempt);
      return checkoutView((await reconcileCheckout(deps, attempt.sessionId)) ?? attempt);
    }),
    route(getMyReceipt, async ({ params, actor }) => {
      const { courseId } = await courseOfPatient(deps, actor);
      const receipt = await receiptOf(deps.db, params.receiptId);
      if (!receipt || receipt.courseId !== courseId) throw notFound('receipt');
      return { ...(await documentFor(deps, makers, 'receipt', receipt.receiptId)), inline: true };
    }),
    route(getMyQuotePdf, async ({ actor }) => {
      const { quoteVersionId } = await readPatientQuote(deps, actor);
      return { ...(await documentFor(deps, makers, 'quote', quoteVersionId)), inline: true };
    }),
  ];
}

/** The course the patient's quote became. Throws refused while it has not been accepted. */
async function courseOfPatient(
  deps: Pick<Deps, 'db'>,
  actor: PatientActor,
): Promise<{ courseId: number; email: string | null }> {
  const [row] = await rawRows<{ course_id: number; email: string | null }>(
    deps.db,
    'SELECT c.course_id, p.email FROM courses c JOIN patients p ON p.patient_id = c.patient_id WHERE c.quote_id = ?',
    [actor.quoteId],
  );
  if (!row)
    throw refused('not_accepted', 'Please accept one of the options first; then there is something to pay.');
  return { courseId: row.course_id, email: row.email };
}
