import { getClinic } from '#contract/settings';
import { currencyCode } from '#domain/money/index';
import { type BoundRoute, route } from '#server/http/route';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';

export function settingsRoutes(deps: Deps): BoundRoute[] {
  return [
    route(getClinic, async ({ actor }) => {
      const [clinic] = await rawRows<{ name: string; currency: string; locale: string }>(
        deps.db,
        'SELECT name, currency, locale FROM clinics ORDER BY clinic_id LIMIT 1',
      );
      if (!clinic) throw notFound('clinic');
      const rows = await rawRows<{
        site_id: number;
        code: string;
        name: string;
        address: string;
        zone: string;
      }>(
        deps.db,
        'SELECT s.site_id, s.code, s.name, s.address, s.zone FROM sites s JOIN user_sites u ON u.site_id = s.site_id WHERE u.user_id = ? ORDER BY s.site_id',
        [actor.userId],
      );
      return {
        name: clinic.name,
        currency: currencyCode(clinic.currency),
        locale: clinic.locale,
        sites: rows.map(({ site_id, ...site }) => ({ siteId: site_id, ...site })),
      };
    }),
  ];
}
