import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { ConfirmDialog, Dialog } from '#client/ui/dialog.tsx';
import { CheckField, TextField } from '#client/ui/fields.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { type ApprovalView, decideApproval, listApprovals } from '#contract/approvals';
import { ROLES, type Role } from '#contract/define';
import { getClinic } from '#contract/settings';
import { changeUser, inviteUser, leaveUser, listUsers, type UserView } from '#contract/users';

const clinicQuery = queryOptions({
  queryKey: ['clinic'],
  queryFn: ({ signal }) => call(getClinic, {}, signal),
});
const usersQuery = queryOptions({
  queryKey: ['users'],
  queryFn: ({ signal }) => call(listUsers, {}, signal),
});
const approvalsQuery = queryOptions({
  queryKey: ['approvals'],
  queryFn: ({ signal }) => call(listApprovals, {}, signal),
});

/** The clinic, what waits for a second person, and who works where. */
export function SettingsPage() {
  const roles = useSession().person?.roles ?? [];
  const clinic = useQuery(clinicQuery);
  const mayApprove = roles.some((role) => role !== 'surgeon');
  const maySee = roles.includes('manager') || roles.includes('auditor');
  return (
    <Page
      title="Settings"
      lead={
        clinic.data
          ? `${clinic.data.name}, ${clinic.data.sites.map((site) => site.name).join(' and ')}`
          : null
      }
    >
      {clinic.isError ? <ErrorState error={clinic.error} retry={() => void clinic.refetch()} /> : null}
      {mayApprove ? <Approvals mayDecide={roles.includes('manager')} /> : null}
      {maySee ? <People mayChange={roles.includes('manager')} sites={clinic.data?.sites ?? []} /> : null}
      {mayApprove || maySee ? null : (
        <EmptyState title="Nothing here needs you">
          Light or dark and single keys are in the menu under your name.
        </EmptyState>
      )}
    </Page>
  );
}

function Approvals({ mayDecide }: { readonly mayDecide: boolean }) {
  const approvals = useQuery(approvalsQuery);
  return (
    <Section title="A second person">
      {approvals.isPending ? <Skeleton rows={3} label="Fetching approvals" /> : null}
      {approvals.isError ? (
        <ErrorState error={approvals.error} retry={() => void approvals.refetch()} />
      ) : null}
      {approvals.data?.approvals.length === 0 ? (
        <EmptyState title="Nothing waits for a second person">
          What somebody asks over their own limit appears here.
        </EmptyState>
      ) : null}
      {approvals.data?.approvals.map((approval) => (
        <Approval key={approval.approvalId} approval={approval} mayDecide={mayDecide} />
      ))}
    </Section>
  );
}

function Approval({ approval, mayDecide }: { readonly approval: ApprovalView; readonly mayDecide: boolean }) {
  const client = useQueryClient();
  const decide = useMutation({
    mutationFn: (approve: boolean) =>
      call(decideApproval, { params: { approvalId: approval.approvalId }, body: { approve } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['approvals'] }),
  });
  return (
    <div className="flex flex-wrap items-baseline justify-between gap-x-6 gap-y-2 border-b border-rule py-2">
      <div>
        <p>
          {approval.kind.replaceAll('_', ' ')}: {approval.reason}
        </p>
        <p className="text-small text-soft">
          asked by {approval.requestedBy}, {approval.siteName}
        </p>
        {decide.error ? (
          <p role="alert" className="font-semibold text-bengal">
            {decide.error.message}
          </p>
        ) : null}
      </div>
      {approval.state === 'asked' ? (
        mayDecide && !approval.requestedByMe ? (
          <span className="flex gap-3">
            <Button sending={decide.isPending} onPress={() => decide.mutate(true)}>
              Approve
            </Button>
            <Button kind="quiet" onPress={() => decide.mutate(false)}>
              Refuse
            </Button>
          </span>
        ) : (
          <StateWord tone="waiting">waits for another person</StateWord>
        )
      ) : (
        <StateWord tone={approval.state === 'approved' ? 'settled' : 'plain'}>
          {approval.state}
          {approval.decidedBy ? ` by ${approval.decidedBy}` : ''}
        </StateWord>
      )}
    </div>
  );
}

interface Site {
  readonly siteId: number;
  readonly name: string;
}

function People({ mayChange, sites }: { readonly mayChange: boolean; readonly sites: readonly Site[] }) {
  const users = useQuery(usersQuery);
  const me = useSession().person?.userId;
  const [editing, setEditing] = useState<UserView | 'new' | null>(null);
  const [leaving, setLeaving] = useState<UserView | null>(null);
  return (
    <Section
      title="People"
      aside={mayChange ? <Button onPress={() => setEditing('new')}>Invite somebody</Button> : null}
    >
      {users.isPending ? <Skeleton rows={6} label="Fetching people" /> : null}
      {users.isError ? <ErrorState error={users.error} retry={() => void users.refetch()} /> : null}
      {users.data ? (
        <SheetTable
          caption="People"
          rows={users.data.users}
          rowKey={(user) => user.userId}
          columns={[
            {
              id: 'name',
              head: 'Name',
              cell: (user) => (
                <>
                  {user.name}
                  <span className="block text-small text-soft">{user.email}</span>
                </>
              ),
            },
            {
              id: 'roles',
              head: 'Roles',
              cell: (user) => user.roles.map((role) => role.replace('_', ' ')).join(', '),
            },
            {
              id: 'sites',
              head: 'Sites',
              wide: true,
              cell: (user) =>
                user.siteIds
                  .map((id) => sites.find((site) => site.siteId === id)?.name ?? `site ${id}`)
                  .join(', '),
            },
            {
              id: 'state',
              head: 'State',
              wide: true,
              cell: (user) => (
                <StateWord
                  tone={user.state === 'active' ? 'settled' : user.state === 'invited' ? 'waiting' : 'plain'}
                >
                  {user.state}
                </StateWord>
              ),
            },
            {
              id: 'next',
              head: <span className="sr-only">Change</span>,
              align: 'right',
              cell: (user) =>
                mayChange && user.state !== 'left' && user.userId !== me ? (
                  <span className="flex flex-wrap justify-end gap-x-3">
                    <Button kind="quiet" aria-label={`Change ${user.name}`} onPress={() => setEditing(user)}>
                      Change
                    </Button>
                    <Button kind="quiet" aria-label={`${user.name} leaves`} onPress={() => setLeaving(user)}>
                      Leaves
                    </Button>
                  </span>
                ) : null,
            },
          ]}
        />
      ) : null}
      <Dialog
        title={editing === 'new' ? 'Invite somebody' : `Change ${editing?.name ?? ''}`}
        open={editing !== null}
        onClose={() => setEditing(null)}
      >
        {editing === null ? null : (
          <PersonForm user={editing === 'new' ? null : editing} sites={sites} done={() => setEditing(null)} />
        )}
      </Dialog>
      <Leave user={leaving} done={() => setLeaving(null)} />
    </Section>
  );
}

function Leave({ user, done }: { readonly user: UserView | null; readonly done: () => void }) {
  const client = useQueryClient();
  const leave = useMutation({
    mutationFn: () => call(leaveUser, { params: { userId: user?.userId ?? 0 } }),
    onSuccess: async () => {
      await client.invalidateQueries(usersQuery);
      done();
    },
  });
  return (
    <ConfirmDialog
      title={`${user?.name ?? ''} leaves`}
      open={user !== null}
      onClose={done}
      confirm="End access now"
      destructive
      sending={leave.isPending}
      error={leave.error?.message}
      onConfirm={() => leave.mutate()}
    >
      <p>Their sessions and links end at once. What they did keeps their name.</p>
    </ConfirmDialog>
  );
}

function PersonForm({
  user,
  sites,
  done,
}: {
  readonly user: UserView | null;
  readonly sites: readonly Site[];
  readonly done: () => void;
}) {
  const client = useQueryClient();
  const announce = useAnnounce();
  const [name, setName] = useState(user?.name ?? '');
  const [email, setEmail] = useState(user?.email ?? '');
  const [roles, setRoles] = useState<readonly Role[]>(user?.roles ?? []);
  const [siteIds, setSiteIds] = useState<readonly number[]>(
    user?.siteIds ?? sites.map((site) => site.siteId),
  );
  const save = useMutation({
    mutationFn: () =>
      user
        ? call(changeUser, {
            params: { userId: user.userId },
            body: { roles: [...roles], siteIds: [...siteIds], version: user.version },
          })
        : call(inviteUser, { body: { name, email, roles: [...roles], siteIds: [...siteIds] } }),
    onSuccess: async () => {
      await client.invalidateQueries(usersQuery);
      announce(user ? 'Rights are changed; their sessions have ended.' : 'The invitation is on its way.');
      done();
    },
  });
  const problem = save.error instanceof ProblemError ? save.error : undefined;
  return (
    <form
      className="grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        save.mutate();
      }}
    >
      {user ? null : (
        <TextField
          label="Name"
          value={name}
          onChange={setName}
          error={problem?.fieldMessage('name')}
          required
        />
      )}
      {user ? null : (
        <TextField
          label="E-mail"
          type="email"
          value={email}
          onChange={setEmail}
          error={problem?.fieldMessage('email')}
          required
        />
      )}
      <fieldset>
        <legend className="text-small font-semibold">Roles</legend>
        {ROLES.map((role) => (
          <CheckField
            key={role}
            label={role.replace('_', ' ')}
            checked={roles.includes(role)}
            onChange={(checked) =>
              setRoles((before) => (checked ? [...before, role] : before.filter((each) => each !== role)))
            }
          />
        ))}
      </fieldset>
      <fieldset>
        <legend className="text-small font-semibold">Sites</legend>
        {sites.map((site) => (
          <CheckField
            key={site.siteId}
            label={site.name}
            checked={siteIds.includes(site.siteId)}
            onChange={(checked) =>
              setSiteIds((before) =>
                checked ? [...before, site.siteId] : before.filter((each) => each !== site.siteId),
              )
            }
          />
        ))}
      </fieldset>
      {problem ? (
        <p role="alert" className="font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
      <div>
        <Button kind="primary" type="submit" sending={save.isPending}>
          {user ? 'Change rights' : 'Send the invitation'}
        </Button>
      </div>
    </form>
  );
}
