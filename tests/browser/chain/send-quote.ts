import type { ClinicDate } from '#domain/time/index';
import { unique } from '#tests/factories/house';
import { expectSound, type Person } from '#tests/support/browser';

export interface SentQuote {
  readonly patientId: number;
  readonly quoteId: number;
  readonly email: string;
}

/** Counsellor and surgeon on their screens: patient, both eyes, the approved plan, the quote sent by mail. */
export async function sendQuoteOnScreen(
  counsellor: Person,
  surgeon: Person,
  surgeryOn: ClinicDate,
): Promise<SentQuote> {
  const email = `${unique('wilma')}@patients.example`;
  const { page } = counsellor;
  await takeUp(counsellor, email);
  const patientId = idAtEnd(page.url());

  await page.getByRole('button', { name: 'Record refraction' }).click();
  const dialog = page.getByRole('dialog');
  for (const [eye, typed] of [
    ['Right eye', ['-3.00', '-0.75', '10']],
    ['Left eye', ['-2.75', '-0.50', '170']],
  ] as const) {
    const fields = dialog.getByRole('group', { name: eye });
    for (const [index, label] of ['Sphere', 'Cylinder', 'Axis'].entries())
      await fields.getByLabel(label).fill(typed[index] ?? '');
  }
  await page.getByRole('button', { name: 'Record', exact: true }).click();
  await dialog.waitFor({ state: 'detached' });
  await page.getByText('no approved plan').waitFor();

  await approvePlanOnPhone(surgeon, patientId);

  await page.reload();
  await page.getByRole('button', { name: 'New quote' }).click();
  await page.waitForURL(/\/quotes\/\d+/);
  const quoteId = idAtEnd(page.url());
  await page.getByLabel('Day of surgery').fill(surgeryOn);
  await page.getByText(/^saved \d/).waitFor();
  await page.getByRole('button', { name: 'Send quote' }).click();
  await expectSound(page);
  await page.getByRole('dialog').getByRole('button', { name: 'Send', exact: true }).click();
  await page.getByRole('heading', { name: 'Versions' }).waitFor();
  await expectSound(page);
  return { patientId, quoteId, email };
}

async function takeUp({ page }: Person, email: string): Promise<void> {
  await page.getByRole('link', { name: 'Patients' }).click();
  await page.getByRole('button', { name: 'New patient' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Given name').fill('Wilma');
  await dialog.getByLabel('Family name').fill(unique('Tester'));
  await dialog.getByLabel('Born on').fill('1990-04-02');
  await dialog.getByLabel('E-mail').fill(email);
  await dialog.getByRole('button', { name: 'Take up' }).click();
  await page.waitForURL(/\/patients\/\d+/);
  await expectSound(page);
}

async function approvePlanOnPhone({ page }: Person, patientId: number): Promise<void> {
  await page.goto(`/patients/${patientId}`);
  await page.getByRole('button', { name: 'Approve plan' }).click();
  for (const eye of ['Right eye', 'Left eye'])
    await page.getByRole('group', { name: eye }).getByLabel('LASIK').check();
  await page.getByRole('button', { name: 'Approve this plan' }).click();
  await page.getByText('plan approved').first().waitFor();
  await expectSound(page);
}

function idAtEnd(url: string): number {
  return Number(/\/(\d+)(?:[?#]|$)/.exec(url)?.[1]);
}
