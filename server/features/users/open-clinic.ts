import { type ClinicDate, dayOf } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import { SYSTEM } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { queueMail } from '#server/platform/outbox';
import { conflict } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';
import { applyRights, insertInvited, issueToken, type PeopleMails } from './manage-users.ts';

/** What an empty house needs before anybody can sign in. */
export interface FirstClinic {
  readonly clinic: {
    readonly name: string;
    readonly address: string;
    readonly currency: string;
    readonly locale: string;
  };
  readonly site: {
    readonly code: string;
    readonly name: string;
    readonly address: string;
    readonly zone: string;
    readonly till: string;
  };
  readonly manager: { readonly name: string; readonly email: string };
}

/** How long the first invitation holds: long enough for a mail server to be put right. */
const INVITATION_MS = 7 * 24 * 60 * 60 * 1000;

/**
 * Opens the first clinic with its first site, till and manager, who is invited by mail; the manager then invites everybody else.
 * @returns the address where the manager sets a password, for when mail does not work yet
 * @throws Problem conflict 'clinic_open' when there is a clinic already
 */
export async function openFirstClinic(deps: Deps, mails: PeopleMails, first: FirstClinic): Promise<string> {
  return await inTransaction(deps.db, async (trx) => {
    const [held] = await rawRows<{ n: number }>(trx, 'SELECT COUNT(*) AS n FROM clinics FOR UPDATE');
    if ((held?.n ?? 0) > 0)
      throw conflict(
        'clinic_open',
        'There is a clinic in this database already; its manager invites people.',
      );
    const clinicId = await insertRow(trx, 'clinics', {
      ...first.clinic,
      created_at: sqlInstant(deps.clock.now()),
    });
    const openedOn: ClinicDate = dayOf(deps.clock.now(), first.site.zone);
    const { till, ...site } = first.site;
    const siteId = await insertRow(trx, 'sites', { clinic_id: clinicId, ...site, opened_on: openedOn });
    await insertRow(trx, 'tills', { site_id: siteId, name: till });
    const userId = await insertInvited(trx, deps, first.manager);
    await applyRights(trx, userId, { roles: ['manager'], siteIds: [siteId] });
    const url = await issueToken(trx, deps, userId, 'invitation', INVITATION_MS);
    await queueMail(trx, deps, {
      kind: 'invitation',
      dedupeKey: `invitation-${userId}-first`,
      to: first.manager.email,
      mail: mails.invitation({ name: first.manager.name, invitedBy: first.clinic.name, url }),
      attachments: [],
      subjectType: 'user',
      subjectId: userId,
    });
    await recordAudit(trx, deps, {
      actor: SYSTEM,
      action: 'clinic.opened',
      subjectType: 'clinic',
      subjectId: clinicId,
      siteId,
      after: first,
    });
    return url;
  });
}
