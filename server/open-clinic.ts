import { z } from 'zod';
import { currencyField, emailField, lineField } from '#contract/fields';
import { peopleMails } from '#server/features/documents/index';
import { openFirstClinic } from '#server/features/users/index';
import { systemClock } from '#server/platform/clock';
import { readConfig } from '#server/platform/config';
import { openDatabase } from '#server/platform/db';
import { createFacts } from '#server/platform/facts';
import { createLog } from '#server/platform/log';

/** What the command is told, as one JSON file. */
const firstClinic = z.strictObject({
  clinic: z.strictObject({
    name: lineField(120),
    address: lineField(300),
    currency: currencyField,
    locale: lineField(20).default('en'),
  }),
  site: z.strictObject({
    code: z.string().regex(/^[A-Z0-9]{1,6}$/, 'needs one to six capitals or digits'),
    name: lineField(120),
    address: lineField(300),
    zone: z
      .string()
      .refine(
        (zone) => Intl.supportedValuesOf('timeZone').includes(zone),
        'needs a time zone such as Europe/Dublin',
      ),
    till: lineField(40).default('Till 1'),
  }),
  manager: z.strictObject({ name: lineField(120), email: emailField }),
});

/**
 * Command: opens the first clinic of an empty, migrated database from a JSON text on standard input, with the server's own
 * environment. Prints where the manager sets a password; exit 1 with sentences naming each field otherwise.
 */
async function main(): Promise<void> {
  const config = readConfig(process.env);
  let text = '';
  for await (const chunk of process.stdin) text += String(chunk);
  const first = firstClinic.safeParse(JSON.parse(text));
  if (!first.success)
    throw new Error(
      first.error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`).join('\n'),
    );
  const db = openDatabase(config.databaseUrl, { min: 0, max: 2 });
  try {
    const deps = { db, clock: systemClock, facts: createFacts(), log: createLog('warn'), config };
    const url = await openFirstClinic(deps, peopleMails, first.data);
    process.stdout.write(
      `${first.data.clinic.name} is open. The invitation goes to ${first.data.manager.email} when the server runs;\nthe same link, good for a week: ${url}\n`,
    );
  } finally {
    await db.destroy();
  }
}

main().catch((error: unknown) => {
  process.stderr.write(
    `The clinic could not be opened.\n${error instanceof Error ? error.message : String(error)}\n`,
  );
  process.exit(1);
});
