import type { Metadata } from 'next';
import Link from 'next/link';
import type { ReactNode } from 'react';
import { Stair } from '@/components/ui/stair';
import { pageAccess } from '@/server/access/page';
import { listNotebooks } from '@/server/notebooks/service';
import { readToday } from '@/server/queue/service';

export const metadata: Metadata = { title: 'Today' };

export default async function TodayPage() {
  const { person } = await pageAccess('self', null, '/');
  const today = await readToday(person.id);
  const writable = (await listNotebooks(person.id)).filter((book) => book.role === 'lead' || book.role === 'author');
  const date = new Intl.DateTimeFormat('en-GB', {
    weekday: 'long',
    day: 'numeric',
    month: 'long',
    year: 'numeric',
  }).format(new Date());
  return (
    <>
      <div className="mb-6 flex flex-wrap items-end justify-between gap-4">
        <div>
          <h1>Today</h1>
          <p className="text-quiet">{date}</p>
        </div>
        {writable.length > 0 ? (
          <Link
            href={writable.length === 1 ? `/notebooks/${writable[0].code}/new` : '/new-entry'}
            className="press press-main"
          >
            New entry
          </Link>
        ) : null}
      </div>
      <div className="grid gap-x-10 gap-y-8 lg:grid-cols-2">
        <Section title="Questions to answer" empty="Nobody waits for an answer of yours.">
          {today.answersOwed.map((q) => (
            <li key={q.entryId + q.text} className="border-t border-rule py-2">
              <Link href={`/entries/${q.entryId}`}>{q.title}</Link>
              <p className="text-quiet">{q.text}</p>
            </li>
          ))}
        </Section>
        <Section title="Waiting for a countersignature of yours" empty="Nothing waits for you.">
          {today.queue.map((line) => (
            <Line
              key={line.id}
              href={`/entries/${line.id}`}
              place={`${line.notebook} leaf ${line.leaf}`}
              title={line.title}
            >
              by {line.author.name}, {line.asked ? 'you were asked' : 'anyone who took no part'}
              {line.openQuestions > 0 ? `, ${line.openQuestions} open` : ''}
            </Line>
          ))}
        </Section>
        <Section title="My drafts" empty="No draft of yours is open.">
          {today.drafts.map((draft) => (
            <Line
              key={draft.id}
              href={`/entries/${draft.id}`}
              place={`${draft.notebook} leaf ${draft.leaf}`}
              title={draft.title}
            >
              work of <span className="figures">{draft.workDate}</span> <Stair state="draft" short />
            </Line>
          ))}
        </Section>
        <Section title="Running cooldowns" empty="No cooldown is running.">
          {today.cooldowns.map((cooldown) => (
            <Line key={cooldown.id} href={`/cooldowns/${cooldown.id}`} place={cooldown.cryostat} title={cooldown.name}>
              since <span className="figures">{cooldown.startedOn}</span>
              {cooldown.baseTemperature ? `, ${cooldown.baseTemperature}` : ''}
            </Line>
          ))}
        </Section>
        {today.unsigned.length > 0 ? (
          <Section title="Unsigned work in notebooks you lead, oldest first" empty="">
            {today.unsigned.map((line) => (
              <Line
                key={line.id}
                href={`/entries/${line.id}`}
                place={`${line.notebook} leaf ${line.leaf}`}
                title={line.title}
              >
                {line.author}, <span className="figures">{line.days}</span> {line.days === 1 ? 'day' : 'days'} old
              </Line>
            ))}
          </Section>
        ) : null}
      </div>
    </>
  );
}

function Section({ title, empty, children }: { title: string; empty: string; children: ReactNode[] }) {
  return (
    <section>
      <h2 className="mb-1">{title}</h2>
      {children.length === 0 ? <p className="border-t border-rule py-2 text-quiet">{empty}</p> : <ul>{children}</ul>}
    </section>
  );
}

function Line({ href, place, title, children }: { href: string; place: string; title: string; children: ReactNode }) {
  return (
    <li className="grid grid-cols-[7.5rem_1fr] gap-x-3 border-t border-rule py-2">
      <span className="figures text-sm text-quiet">{place}</span>
      <span>
        <Link href={href} className="font-medium">
          {title}
        </Link>
        <span className="block text-sm text-quiet">{children}</span>
      </span>
    </li>
  );
}
