import type { ReactNode } from 'react';

type Mail = { id: string; to: string; subject: string; text: string; queuedAt: string };

const people = [
  ['ines@fjordheim.example', 'Ines Aldana, lead'],
  ['tomas@fjordheim.example', 'Tomas Reinholt, author'],
  ['priya@fjordheim.example', 'Priya Menon, witness'],
  ['oskar@fjordheim.example', 'Oskar Lind, reader'],
  ['ada@fjordheim.example', 'Ada Forsell, administrator'],
] as const;

/** Demo accounts and the local mailbox: only where the demo data is loaded. */
export function DemoNotice({ mails }: { mails: Mail[] }) {
  return (
    <section aria-labelledby="demo-heading" className="border-l-4 border-attention bg-attention-ground p-4">
      <h2 id="demo-heading">Demonstration with invented data</h2>
      <p className="my-2">
        The Fjordheim Cryoelectronics Group, its people, devices and traces are invented. Password of all:{' '}
        <code>cold-finger-demo</code>
      </p>
      <ul className="my-2">
        {people.map(([address, who]) => (
          <li key={address} className="my-1">
            <code className="break-all">{address}</code> <span className="text-quiet">{who}</span>
          </li>
        ))}
      </ul>
      <h2 className="mt-6">Local mailbox</h2>
      {mails.length === 0 ? (
        <p className="text-quiet">No mail yet.</p>
      ) : (
        <ul>
          {mails.map((mail) => (
            <li key={mail.id} className="border-t border-rule py-2">
              <details>
                <summary className="cursor-pointer break-words">
                  {mail.subject} <span className="text-quiet">to {mail.to}</span>
                </summary>
                <p className="whitespace-pre-wrap break-words py-2">{withLinks(mail.text)}</p>
              </details>
            </li>
          ))}
        </ul>
      )}
    </section>
  );
}

/** Addresses of this application become links; everything else stays text. */
function withLinks(text: string): ReactNode[] {
  return text.split(/(https?:\/\/\S+)/).map((part, index) =>
    index % 2 === 1 ? (
      <a key={index} href={new URL(part).pathname + new URL(part).search}>
        {part}
      </a>
    ) : (
      part
    ),
  );
}
