import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { z } from 'zod';
import { type Contract, ROLES } from '#contract/define';
import { ALL_CONTRACTS } from '#contract/index';
import { makeSite, makeUser, type TestSite } from '#tests/factories/house';
import type { Agent } from '#tests/support/agent';
import { type TestApp, testApp } from '#tests/support/test-app';

let app: TestApp;
let site: TestSite;
const byRole = new Map<string, Agent>();

beforeAll(async () => {
  app = await testApp();
  site = await makeSite(app.deps);
  for (const role of ROLES) {
    const user = await makeUser(app.deps, [role], [site.siteId]);
    byRole.set(role, await app.signIn(user.email));
  }
});
afterAll(() => app.stop());

const UNKNOWN_ID = '987654321';

/** A path that leads nowhere: ids nobody has, days and keys that are well formed. */
function pathOf(contract: Contract): string {
  return contract.path.replace(/:(\w+)/g, (_all, name: string) => {
    if (name === 'eye') return 'OD';
    if (name === 'day') return '2026-03-12';
    if (name === 'attemptKey') return '5e0d9b3e-0000-4000-8000-000000000000';
    return UNKNOWN_ID;
  });
}

function agentWith(contract: Contract): Agent {
  if (contract.access.kind !== 'staff') return app.agent();
  const agent = byRole.get(contract.access.roles[0] ?? '');
  if (!agent) throw new Error(`Nobody may call ${contract.id}`);
  return agent;
}

const staffContracts = ALL_CONTRACTS.filter((contract) => contract.access.kind === 'staff');
const patientContracts = ALL_CONTRACTS.filter((contract) => contract.access.kind === 'patient');

describe('every contract', () => {
  test.each([...staffContracts, ...patientContracts].map((contract) => [contract.id, contract] as const))(
    '%s · unsigned · 401',
    async (_id, contract) => {
      const answer = await app
        .agent()
        .send(contract.method.toUpperCase(), pathOf(contract), contract.method === 'get' ? undefined : {});
      expect(answer.status).toBe(401);
      expect(answer.headers.get('content-type')).toContain('application/problem+json');
    },
  );

  test.each(staffContracts.map((contract) => [contract.id, contract] as const))(
    '%s · each forbidden role · 403',
    async (_id, contract) => {
      const { access } = contract;
      const forbidden = ROLES.filter((role) => access.kind === 'staff' && !access.roles.includes(role));
      for (const role of forbidden) {
        const answer = await byRole
          .get(role)
          ?.send(contract.method.toUpperCase(), pathOf(contract), contract.method === 'get' ? undefined : {});
        expect([role, answer?.status]).toEqual([role, 403]);
      }
      expect(forbidden.every((role) => byRole.has(role))).toBe(true);
    },
  );

  const withIds = staffContracts.filter((contract) => contract.params !== undefined);
  test.each(withIds.map((contract) => [contract.id, contract] as const))(
    '%s · ids nobody has · 404, 403 or a named field',
    async (_id, contract) => {
      const answer = await agentWith(contract).send(
        contract.method.toUpperCase(),
        pathOf(contract),
        contract.method === 'get' ? undefined : sampleBody(),
      );
      expect([400, 403, 404, 422]).toContain(answer.status);
      if (answer.status === 422)
        expect((answer.body as { errors?: unknown[] }).errors?.length ?? 0).toBeGreaterThan(0);
    },
  );

  test.each(withIds.map((contract) => [contract.id, contract] as const))(
    '%s · an id that is none · 422 naming it',
    async (_id, contract) => {
      const [name = ''] = Object.keys(contract.params?.shape ?? {});
      const path = contract.path.replace(/:(\w+)/g, (_all, each: string) =>
        each === name ? 'not-an-id!' : UNKNOWN_ID,
      );
      const answer = await agentWith(contract).send(
        contract.method.toUpperCase(),
        path,
        contract.method === 'get' ? undefined : {},
      );
      expect(answer.status).toBe(422);
      expect(JSON.stringify((answer.body as { errors: unknown[] }).errors)).toContain(name);
    },
  );

  const withBodies = staffContracts.filter(
    (contract) => contract.body !== undefined && requiredFields(contract).length > 0 && !contract.upload,
  );
  test.each(withBodies.map((contract) => [contract.id, contract] as const))(
    '%s · an empty body · 422 naming the field',
    async (_id, contract) => {
      const answer = await agentWith(contract).send(contract.method.toUpperCase(), pathOf(contract), {});
      expect(answer.status).toBe(422);
      const named = (answer.body as { errors: { field: string }[] }).errors.map(
        (error) => error.field.split('.')[0],
      );
      expect(named).toContain(requiredFields(contract)[0]);
    },
  );

  test.each(withBodies.map((contract) => [contract.id, contract] as const))(
    '%s · a body that is no JSON · 400',
    async (_id, contract) => {
      const answer = await agentWith(contract).send(
        contract.method.toUpperCase(),
        pathOf(contract),
        '{"half":',
      );
      expect(answer.status).toBe(400);
    },
  );

  test.each(
    staffContracts
      .filter((contract) => contract.method !== 'get')
      .map((contract) => [contract.id, contract] as const),
  )('%s · without the CSRF token · 403', async (_id, contract) => {
    const answer = await agentWith(contract).send(
      contract.method.toUpperCase(),
      pathOf(contract),
      {},
      { 'x-csrf-token': 'not the token' },
    );
    expect(answer.status).toBe(403);
    expect((answer.body as { code: string }).code).toBe('csrf_failed');
  });
});

function requiredFields(contract: Contract): string[] {
  const shape = (contract.body as { shape?: Record<string, z.ZodType> } | undefined)?.shape ?? {};
  return Object.entries(shape)
    .filter(([, field]) => !field.safeParse(undefined).success)
    .map(([name]) => name);
}

/** Nothing: either the operation needs nothing, or its refusal names the first field. */
function sampleBody(): unknown {
  return {};
}
