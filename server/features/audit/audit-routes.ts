import { listAuditRows } from '#contract/audit';
import type { Instant } from '#domain/time/index';
import { type BoundRoute, route } from '#server/http/route';
import { rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';

const PAGE = 100;

interface Row {
  audit_row_id: number;
  recorded_at: Instant;
  actor_kind: 'staff' | 'patient' | 'system';
  name: string | null;
  action: string;
  subject_type: string;
  subject_id: string;
  site_name: string | null;
  sealed: number;
}

export function auditRoutes(deps: Deps): BoundRoute[] {
  return [
    route(listAuditRows, async ({ query, actor }) => {
      const sites = actor.siteIds.map(() => '?').join(',');
      const parts = [`(a.site_id IS NULL OR a.site_id IN (${sites}))`];
      const bindings: unknown[] = [...actor.siteIds];
      for (const [sql, value] of [
        ['a.audit_row_id < ?', query.before],
        ['a.subject_type = ?', query.subjectType],
        ['a.subject_id = ?', query.subjectId],
      ] as const) {
        if (value === undefined) continue;
        parts.push(sql);
        bindings.push(value);
      }
      const rows = await rawRows<Row>(
        deps.db,
        `SELECT a.audit_row_id, a.recorded_at, a.actor_kind, u.name, a.action, a.subject_type, a.subject_id, s.name AS site_name,
                x.audit_seal_id IS NOT NULL AS sealed
         FROM audit_rows a LEFT JOIN users u ON u.user_id = a.user_id LEFT JOIN sites s ON s.site_id = a.site_id
         LEFT JOIN audit_seals x ON x.subject_table = 'audit_rows' AND x.subject_id = a.audit_row_id
         WHERE ${parts.join(' AND ')} ORDER BY a.audit_row_id DESC LIMIT ${PAGE + 1}`,
        bindings,
      );
      return {
        rows: rows.slice(0, PAGE).map((row) => ({
          auditRowId: row.audit_row_id,
          recordedAt: row.recorded_at,
          actorKind: row.actor_kind,
          by: row.name,
          action: row.action,
          subjectType: row.subject_type,
          subjectId: row.subject_id,
          siteName: row.site_name,
          sealed: row.sealed === 1,
        })),
        more: rows.length > PAGE,
      };
    }),
  ];
}
