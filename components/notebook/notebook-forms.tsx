'use client';

import { ActionForm } from '@/components/ui/action-form';
import { Choice, Field, LongField } from '@/components/ui/field';
import { request } from '@/components/hooks/request';
import { ErrorSentence } from '@/components/ui/sentence';
import { useState } from 'react';
import { notebookRoles, type NotebookRole } from '@/lib/schemas/person';

export function FoundNotebook() {
  return (
    <ActionForm
      method="POST"
      url="/api/notebooks"
      submit="Begin it"
      done={(answer) => ({ go: `/notebooks/${String(answer.code)}` })}
      className="mt-4 space-y-4"
    >
      <Field
        label="Code"
        name="code"
        placeholder="NB-03"
        hint="Letters, a hyphen, a number. It is printed on every leaf and stays."
        required
      />
      <Field label="Title" name="title" required />
      <LongField label="About" name="description" />
    </ActionForm>
  );
}

export function NotebookFacts({
  code,
  title,
  description,
  lateAfterDays,
}: {
  code: string;
  title: string;
  description: string;
  lateAfterDays: number;
}) {
  return (
    <ActionForm
      method="PUT"
      url={`/api/notebooks/${code}`}
      submit="Store"
      toBody={(form) => ({
        title: form.get('title'),
        description: form.get('description'),
        lateAfterDays: Number(form.get('lateAfterDays')),
      })}
      done={() => 'Stored.'}
    >
      <Field label="Title" name="title" defaultValue={title} required />
      <LongField label="About" name="description" defaultValue={description} />
      <Field
        label="A signature is late after (days)"
        name="lateAfterDays"
        type="number"
        min={0}
        max={365}
        defaultValue={lateAfterDays}
        required
      />
    </ActionForm>
  );
}

type Member = { person: { id: string; name: string }; role: NotebookRole; since: string };

/** Members with their roles; the lead changes them. */
export function Members({ code, members, mayChange }: { code: string; members: Member[]; mayChange: boolean }) {
  const [problem, setProblem] = useState<string | null>(null);
  const [said, setSaid] = useState('');
  const change = async (id: string, role: NotebookRole | null) => {
    setProblem(null);
    try {
      await request(role ? 'PUT' : 'DELETE', `/api/notebooks/${code}/members/${id}`, role ? { role } : undefined);
      setSaid('Stored.');
      window.location.reload();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
    }
  };
  return (
    <>
      <ErrorSentence>{problem}</ErrorSentence>
      <p role="status" className="sr-only">
        {said}
      </p>
      <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label="Members">
        <table className="table-plain">
          <thead>
            <tr>
              <th scope="col">Person</th>
              <th scope="col">Role</th>
              {mayChange ? (
                <th scope="col">
                  <span className="sr-only">Remove</span>
                </th>
              ) : null}
            </tr>
          </thead>
          <tbody>
            {members.map((member) => (
              <tr key={member.person.id}>
                <td>{member.person.name}</td>
                <td>
                  {mayChange ? (
                    <select
                      className="field !w-auto"
                      aria-label={`Role of ${member.person.name}`}
                      defaultValue={member.role}
                      onChange={(event) => void change(member.person.id, event.target.value as NotebookRole)}
                    >
                      {notebookRoles.map((role) => (
                        <option key={role}>{role}</option>
                      ))}
                    </select>
                  ) : (
                    member.role
                  )}
                </td>
                {mayChange ? (
                  <td>
                    <button type="button" className="press" onClick={() => void change(member.person.id, null)}>
                      Remove<span className="sr-only"> {member.person.name}</span>
                    </button>
                  </td>
                ) : null}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {mayChange ? (
        <ActionForm
          method="POST"
          url={`/api/notebooks/${code}/members`}
          submit="Add"
          done={() => ({ go: `/notebooks/${code}/members` })}
          className="mt-6 max-w-md space-y-4"
        >
          <Field label="E-mail address of somebody with an account" name="email" type="email" required />
          <Choice label="Role" name="role" options={notebookRoles} defaultValue="author" />
        </ActionForm>
      ) : null}
    </>
  );
}
