import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import {
  approvePlan,
  changePatient,
  createPatient,
  getPatient,
  listPatients,
  recordPrescription,
} from '#contract/patients';
import { instant } from '#domain/time/index';
import { type SteppedClock, steppedClock } from '#server/platform/clock';
import { rawRows } from '#server/platform/db';
import { makeSite, makeUser, type TestSite, type TestUser, unique } from '#tests/factories/house';
import { makePatient, putBookInForce } from '#tests/factories/quotes';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';

let app: TestApp;
let clock: SteppedClock;
let site: TestSite;
let counsellor: TestUser;
let desk: Agent;
let surgeon: Agent;
let elsewhere: Agent;

beforeAll(async () => {
  clock = steppedClock(instant('2026-03-12T09:42:00Z'));
  app = await testApp({ clock });
  site = await makeSite(app.deps);
  const other = await makeSite(app.deps);
  counsellor = await makeUser(app.deps, ['counsellor'], [site.siteId]);
  desk = await app.signIn(counsellor.email);
  surgeon = await app.signIn((await makeUser(app.deps, ['surgeon'], [site.siteId])).email);
  elsewhere = await app.signIn((await makeUser(app.deps, ['counsellor', 'manager'], [other.siteId])).email);
  await putBookInForce(app.deps, site.siteId);
});

afterAll(() => app.stop());

async function auditOf(subjectType: string, subjectId: number): Promise<string[]> {
  const rows = await rawRows<{ action: string }>(
    app.deps.db,
    'SELECT action FROM audit_rows WHERE subject_type = ? AND subject_id = ? ORDER BY audit_row_id',
    [subjectType, String(subjectId)],
  );
  return rows.map((row) => row.action);
}

describe('taking up a patient', () => {
  test('at one’s site · stores the particulars and who did it', async () => {
    const patient = await makePatient(desk, site.siteId, { email: 'Mara@Example.ORG' });
    expect(patient).toMatchObject({ email: 'mara@example.org', version: 1, today: '2026-03-12', quotes: [] });
    expect(await auditOf('patient', patient.patientId)).toEqual(['patient.created']);
  });

  test('the same name and birthday again · asks first, then may', async () => {
    const { givenName, familyName, bornOn } = await makePatient(desk, site.siteId);
    const body = {
      siteId: site.siteId,
      givenName,
      familyName: familyName.toUpperCase(),
      bornOn,
      email: null,
      phone: null,
    };
    const twin = await desk.tryCall(createPatient, { body });
    expect([twin.status, twin.body.reason]).toEqual([409, 'patient_exists']);
    await desk.call(createPatient, { body: { ...body, evenSo: true } });
  });

  test.each([
    ['bornOn', { bornOn: '2026-03-13' }, 422],
    ['bornOn', { bornOn: '1996-02-30' }, 422],
    ['givenName', { givenName: '  ' }, 422],
    ['email', { email: 'not an address' }, 422],
  ])('a wrong %s (%j) · is refused by name', async (field, wrong, status) => {
    const body = {
      siteId: site.siteId,
      givenName: 'A',
      familyName: 'B',
      bornOn: '1990-01-01',
      email: null,
      phone: null,
    };
    const answer = await desk.tryCall(createPatient, { body: { ...body, ...wrong } });
    expect(answer.status).toBe(status);
    expect(answer.body.errors?.map((error) => error.field)).toEqual([field]);
  });

  test('at a site one does not work at · there is no such site', async () => {
    const body = {
      siteId: site.siteId,
      givenName: 'A',
      familyName: 'B',
      bornOn: '1990-01-01',
      email: null,
      phone: null,
    };
    expect((await elsewhere.tryCall(createPatient, { body })).status).toBe(404);
  });
});

describe('correcting a patient', () => {
  test('two people at once · the second is told and nothing of theirs is saved', async () => {
    const patient = await makePatient(desk, site.siteId);
    const { givenName, familyName, bornOn, email } = patient;
    const change = { givenName, familyName, bornOn, email, version: 1 };
    const params = { patientId: patient.patientId };
    const first = await desk.call(changePatient, { params, body: { ...change, phone: '01 555' } });
    expect(first).toMatchObject({ phone: '01 555', version: 2 });
    const second = await desk.tryCall(changePatient, { params, body: { ...change, phone: '02 555' } });
    expect([second.status, second.body.reason]).toEqual([409, 'patient_changed']);
    expect((await desk.call(getPatient, { params })).phone).toBe('01 555');
    expect(await auditOf('patient', patient.patientId)).toEqual(['patient.created', 'patient.changed']);
  });
});

describe('finding a patient', () => {
  test('by names, birthday or address · finds; by a LIKE pattern or at another site · does not', async () => {
    const word = unique('Zephyr');
    const patient = await makePatient(desk, site.siteId, { givenName: `Anne ${word}`, bornOn: '1971-12-24' });
    const found = async (who: Agent, q: string) =>
      (await who.call(listPatients, { query: { q } })).patients.map((each) => each.patientId);
    for (const q of [word, `ann ${word}`, `24 December 1971 ${word}`, `${patient.email ?? ''} 24.12.1971`])
      expect(await found(desk, q)).toEqual([patient.patientId]);
    expect(await found(desk, `%${word.slice(1)}`)).toEqual([]);
    expect(await found(desk, `${word} 25.12.1971`)).toEqual([]);
    expect(await found(elsewhere, word)).toEqual([]);
    expect((await elsewhere.tryCall(getPatient, { params: { patientId: patient.patientId } })).status).toBe(
      404,
    );
  });
});

describe('recording a refraction', () => {
  test('in plus cylinders · keeps what was typed and the minus form beside it', async () => {
    const { patientId } = await makePatient(desk, site.siteId);
    const read = await desk.call(recordPrescription, {
      params: { patientId },
      body: {
        refractedOn: '2026-03-10',
        OD: { sphere: '−3.50', cylinder: '+1.50', axis: '165' },
        OS: { sphere: 'plano' },
      },
    });
    expect(read.prescriptions).toMatchObject([
      {
        eye: 'OS',
        typed: { sphereMd: 0, cylinderMd: null, axisDeg: null },
        minusForm: { sphereMd: 0, cylinderMd: 0, axisDeg: null },
      },
      {
        eye: 'OD',
        typed: { sphereMd: -3_500, cylinderMd: 1_500, axisDeg: 165 },
        minusForm: { sphereMd: -2_000, cylinderMd: -1_500, axisDeg: 75 },
        vertexMm: 12,
        recordedBy: counsellor.name,
      },
    ]);
  });

  test('with faults in both eyes · names every field and records nothing', async () => {
    const { patientId } = await makePatient(desk, site.siteId);
    const answer = await desk.tryCall(recordPrescription, {
      params: { patientId },
      body: {
        refractedOn: '2026-03-10',
        OD: { sphere: '-2.10', cylinder: '-1.50' },
        OS: { sphere: '-31', cylinder: '-1', axis: '181' },
      },
    });
    expect(answer.status).toBe(422);
    expect(answer.body.errors?.map((error) => error.field)).toEqual([
      'OD.sphere',
      'OD.axis',
      'OS.sphere',
      'OS.axis',
    ]);
    expect((await desk.call(getPatient, { params: { patientId } })).prescriptions).toEqual([]);
  });

  test('of a day to come, or of no eye · is refused', async () => {
    const { patientId } = await makePatient(desk, site.siteId);
    const attempt = async (refractedOn: string, OD: { sphere: string } | null) =>
      (await desk.tryCall(recordPrescription, { params: { patientId }, body: { refractedOn, OD, OS: null } }))
        .body.reason;
    expect(await attempt('2026-03-13', { sphere: '-1' })).toBe('refracted_later');
    expect(await attempt('2026-03-12', null)).toBe('no_eye');
  });
});

describe('approving a plan', () => {
  test('by the surgeon · holds for 90 days unless said otherwise, and the newest alone counts', async () => {
    const { patientId } = await makePatient(desk, site.siteId);
    const params = { patientId };
    const first = await surgeon.call(approvePlan, {
      params,
      body: { OD: ['lasik'], OS: ['lasik', 'surface-ablation'] },
    });
    expect(first.plans).toMatchObject([{ expiresOn: '2026-06-10', good: true }]);
    const second = await surgeon.call(approvePlan, {
      params,
      body: { OD: [], OS: ['lasik'], expiresOn: '2026-03-12' },
    });
    expect(second.plans.map((plan) => plan.good)).toEqual([true, false]);
    clock.set(instant('2026-03-13T09:00:00Z'));
    const nextDay = await app.signIn(counsellor.email);
    const later = await nextDay.call(getPatient, { params });
    expect(later.plans.map((plan) => plan.good)).toEqual([false, false]);
    clock.set(instant('2026-03-12T09:42:00Z'));
  });

  test.each([
    ['no_procedure', { OD: [], OS: [] }],
    ['unknown_procedure', { OD: ['lasik'], OS: ['magic'] }],
    ['bad_expiry', { OD: ['lasik'], OS: [], expiresOn: '2026-03-11' }],
    ['bad_expiry', { OD: ['lasik'], OS: [], expiresOn: '2027-04-11' }],
  ])('refused · %s', async (reason, body) => {
    const { patientId } = await makePatient(desk, site.siteId);
    const answer = await surgeon.tryCall(approvePlan, { params: { patientId }, body });
    expect([answer.status, answer.body.reason]).toEqual([422, reason]);
  });

  test('by anybody else · is forbidden, the manager included', async () => {
    const { patientId } = await makePatient(desk, site.siteId);
    const manager = await app.signIn((await makeUser(app.deps, ['manager'], [site.siteId])).email);
    for (const agent of [desk, manager])
      expect(
        (await agent.tryCall(approvePlan, { params: { patientId }, body: { OD: ['lasik'], OS: [] } })).status,
      ).toBe(403);
  });
});
