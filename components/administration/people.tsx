'use client';

import { useState } from 'react';
import { request } from '@/components/hooks/request';
import { ActionForm } from '@/components/ui/action-form';
import { DataTable, type Column } from '@/components/ui/data-table';
import { Choice, Field } from '@/components/ui/field';
import { ErrorSentence } from '@/components/ui/sentence';
import { installationRoles, type InstallationRole } from '@/lib/schemas/person';

type Account = {
  id: string;
  name: string;
  email: string;
  role: InstallationRole;
  disabled: boolean;
  createdAt: string;
  twoFactor: boolean;
};

export function AccountsTable({ accounts, selfId }: { accounts: Account[]; selfId: string }) {
  const [problem, setProblem] = useState<string | null>(null);
  const change = async (id: string, body: object) => {
    setProblem(null);
    try {
      await request('PATCH', `/api/administration/accounts/${id}`, body);
      window.location.reload();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    }
  };
  const columns: Column<Account>[] = [
    { key: 'name', title: 'Name', value: (row) => row.name },
    {
      key: 'email',
      title: 'E-mail',
      value: (row) => row.email,
      cell: (row) => <span className="break-all">{row.email}</span>,
    },
    {
      key: 'role',
      title: 'Role',
      value: (row) => row.role,
      cell: (row) =>
        row.id === selfId ? (
          row.role
        ) : (
          <select
            className="field !w-auto"
            aria-label={`Role of ${row.name}`}
            defaultValue={row.role}
            onChange={(event) => void change(row.id, { role: event.target.value })}
          >
            {installationRoles.map((role) => (
              <option key={role}>{role}</option>
            ))}
          </select>
        ),
    },
    { key: 'second', title: 'Second factor', value: (row) => (row.twoFactor ? 'on' : 'off') },
    {
      key: 'since',
      title: 'Since',
      value: (row) => row.createdAt.slice(0, 10),
      cell: (row) => <span className="figures whitespace-nowrap">{row.createdAt.slice(0, 10)}</span>,
    },
    {
      key: 'state',
      title: 'Account',
      value: (row) => (row.disabled ? 'closed' : 'open'),
      cell: (row) =>
        row.id === selfId ? (
          'open'
        ) : (
          <button type="button" className="press" onClick={() => void change(row.id, { disabled: !row.disabled })}>
            {row.disabled ? 'Open again' : 'Close'}
            <span className="sr-only"> the account of {row.name}</span>
          </button>
        ),
    },
  ];
  return (
    <>
      <ErrorSentence>{problem}</ErrorSentence>
      <DataTable
        caption="People"
        rows={accounts}
        columns={columns}
        rowKey={(row) => row.id}
        empty="Nobody."
        fileName="people"
      />
    </>
  );
}

export function InvitationForm() {
  return (
    <ActionForm
      method="POST"
      url="/api/administration/invitations"
      submit="Send the invitation"
      reset
      done={() => 'The invitation is on its way; its link works once, for seven days.'}
    >
      <Field label="E-mail address" name="email" type="email" required />
      <Field label="Full name" name="name" required />
      <Choice
        label="Role"
        name="role"
        options={installationRoles}
        defaultValue="member"
        hint="A member's rights come from notebooks; an administrator manages accounts."
      />
    </ActionForm>
  );
}

type Invitation = { id: string; email: string; name: string; createdAt: string; state: string };

export function InvitationList({ invitations }: { invitations: Invitation[] }) {
  const [shown, setShown] = useState(invitations);
  const [problem, setProblem] = useState<string | null>(null);
  const withdraw = async (id: string) => {
    try {
      await request('DELETE', `/api/administration/invitations/${id}`);
      setShown(shown.map((item) => (item.id === id ? { ...item, state: 'withdrawn' } : item)));
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    }
  };
  if (shown.length === 0) return <p className="text-quiet">None was sent.</p>;
  return (
    <>
      <ErrorSentence>{problem}</ErrorSentence>
      <ul>
        {shown.map((item) => (
          <li key={item.id} className="flex flex-wrap items-center justify-between gap-2 border-t border-rule py-2">
            <span className="min-w-0">
              {item.name}{' '}
              <span className="block break-all text-sm text-quiet">
                {item.email}, {item.state}
              </span>
            </span>
            {item.state === 'waiting' ? (
              <button type="button" className="press" onClick={() => void withdraw(item.id)}>
                Withdraw<span className="sr-only"> the invitation of {item.name}</span>
              </button>
            ) : null}
          </li>
        ))}
      </ul>
    </>
  );
}

type Mail = {
  id: string;
  to: string;
  subject: string;
  queuedAt: string;
  sentAt: string | null;
  attempts: number;
  problem: string | null;
};

const mailColumns: Column<Mail>[] = [
  {
    key: 'queued',
    title: 'Queued (UTC)',
    value: (row) => row.queuedAt,
    cell: (row) => <span className="figures whitespace-nowrap">{row.queuedAt.slice(0, 16).replace('T', ' ')}</span>,
  },
  { key: 'to', title: 'To', value: (row) => row.to, cell: (row) => <span className="break-all">{row.to}</span> },
  { key: 'subject', title: 'Subject', value: (row) => row.subject },
  {
    key: 'state',
    title: 'State',
    value: (row) => (row.sentAt ? 'sent' : row.problem ? `not sent, ${row.attempts} tries: ${row.problem}` : 'waits'),
  },
];

export function OutboxTable({ mails }: { mails: Mail[] }) {
  return (
    <DataTable
      caption="Mail outbox"
      rows={mails}
      columns={mailColumns}
      rowKey={(row) => row.id}
      empty="No mail was sent."
      fileName="outbox"
    />
  );
}
