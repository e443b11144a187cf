import 'server-only';
import { randomUUID } from 'node:crypto';
import { initialsOf, type InstallationRole, type NotebookRole } from '@/lib/schemas/person';
import type { Person } from '@/server/access/person';
import { createAccount } from '@/server/accounts/service';
import { hashPassword } from '@/server/auth/password';
import { insertCooldown } from '@/server/cooldowns/service';
import type { Db } from '@/server/db/client';
import { notebookMember } from '@/server/db/schema/notebooks';
import { insertDevice } from '@/server/devices/service';
import { insertNotebook } from '@/server/notebooks/service';

/** Password of every demonstration account; shown on the sign-in page. */
export const demoPassword = 'cold-finger-demo';

const roster = {
  ines: ['Ines Aldana', 'member'],
  tomas: ['Tomas Reinholt', 'member'],
  priya: ['Priya Menon', 'member'],
  oskar: ['Oskar Lind', 'member'],
  ada: ['Ada Forsell', 'administrator'],
} as const satisfies Record<string, readonly [string, InstallationRole]>;

export type Who = keyof typeof roster;
export type DemoPeople = Record<Who, Person>;

export async function makePeople(db: Db): Promise<DemoPeople> {
  const made = await Promise.all(
    (Object.keys(roster) as Who[]).map(async (key): Promise<[Who, Person]> => {
      const [name, role] = roster[key];
      const email = `${key}@fjordheim.example`;
      const passwordHash = await hashPassword(demoPassword);
      const id = await db.transaction((tx) => createAccount(tx, { email, name, role, passwordHash, actorId: null }));
      return [
        key,
        {
          id,
          name,
          email,
          initials: initialsOf(name),
          role,
          twoFactor: false,
          by: 'session',
          sessionId: null,
          sessionStartedAt: null,
        },
      ];
    }),
  );
  return Object.fromEntries(made) as DemoPeople;
}

export type DemoPlaces = {
  books: Record<'escape' | 'pumps', string>;
  devices: Record<'ga' | 'c7' | 'd2', string>;
  cooldowns: Record<'tern24' | 'brine11' | 'brine12', string>;
};

const day = (daysAgo: number) => new Date(Date.now() - daysAgo * 86_400_000).toISOString().slice(0, 10);

/** Two notebooks, three devices, three cooldowns. */
export async function makePlaces(db: Db, people: DemoPeople): Promise<DemoPlaces> {
  const id = () => randomUUID();
  const places: DemoPlaces = {
    books: { escape: id(), pumps: id() },
    devices: { ga: id(), c7: id(), d2: id() },
    cooldowns: { tern24: id(), brine11: id(), brine12: id() },
  };
  await db.transaction(async (tx) => {
    const lead = people.ines.id;
    await insertNotebook(tx, {
      id: places.books.escape,
      code: 'NB-03',
      title: 'Escape over modulated barriers',
      description: 'Invented data: GaAs pumps in the helium-4 insert Tern.',
      leadId: lead,
    });
    await insertNotebook(tx, {
      id: places.books.pumps,
      code: 'NB-04',
      title: 'Silicon pumps, accuracy runs',
      description: 'Invented data: Si/SiGe devices in the dilution refrigerator Brine.',
      leadId: lead,
    });
    const members: [Who, NotebookRole][] = [
      ['tomas', 'author'],
      ['priya', 'witness'],
      ['oskar', 'reader'],
    ];
    for (const book of Object.values(places.books)) {
      await tx
        .insert(notebookMember)
        .values(members.map(([who, role]) => ({ notebookId: book, userId: people[who].id, role })));
    }
    const gate = (name: string, purpose: string, widthNm: number, lengthNm: number) => ({
      name,
      purpose,
      widthNm,
      lengthNm,
    });
    const silicon = {
      lot: 'SK4',
      wafer: 'W2',
      material: 'Si/SiGe',
      dimensions: 'well 8 nm, barrier gates 60 nm apart',
      remarks: 'Invented device.',
    };
    await insertDevice(tx, places.devices.ga, places.books.escape, lead, {
      name: 'GA1-B3',
      lot: 'GA1',
      wafer: 'W1',
      die: 'B3',
      material: 'etched GaAs channel',
      dimensions: 'channel 700 nm wide, gates 250 nm apart',
      remarks: 'Invented device.',
      gates: [gate('entrance', 'entrance barrier, driven', 100, 700), gate('exit', 'exit barrier', 100, 700)],
    });
    await insertDevice(tx, places.devices.c7, places.books.pumps, lead, {
      name: 'SK4-C7',
      die: 'C7',
      ...silicon,
      gates: [
        gate('left', 'entrance barrier', 50, 80),
        gate('right', 'exit barrier', 50, 80),
        gate('sensor', 'charge sensor', 60, 90),
      ],
    });
    await insertDevice(tx, places.devices.d2, places.books.pumps, lead, {
      name: 'SK4-D2',
      die: 'D2',
      ...silicon,
      gates: [
        gate('left', 'entrance barrier', 50, 80),
        gate('right', 'exit barrier', 50, 80),
        gate('sensor', 'charge sensor', 60, 90),
      ],
    });
    const line = (
      name: string,
      contact: string,
      attenuation: string,
      filter: string,
      biasTee: string,
      instrument: string,
    ) => ({ name, contact, attenuation, filter, biasTee, instrument });
    await insertCooldown(tx, places.cooldowns.tern24, places.books.escape, lead, {
      name: 'Tern 24',
      cryostat: 'Tern, helium-4 insert',
      startedOn: day(20),
      endedOn: null,
      baseTemperature: '1.5 K',
      remarks: 'Invented.',
      deviceIds: [places.devices.ga],
      lines: [
        line('RF 1', 'entrance gate', '20 dB at 4 K', '', '10 nF / 100 kΩ', 'waveform generator A'),
        line('DC 3', 'exit gate', '', 'RC 1.6 kHz', '', 'voltage source 2'),
        line('DC 7', 'drain', '', 'RC 10 kHz', '', 'current amplifier CAL-0181'),
      ],
    });
    await insertCooldown(tx, places.cooldowns.brine11, places.books.pumps, lead, {
      name: 'Brine 11',
      cryostat: 'Brine, dilution refrigerator',
      startedOn: day(46),
      endedOn: day(30),
      baseTemperature: '12 mK',
      remarks: 'Invented. Ended for a leak test.',
      deviceIds: [places.devices.c7],
      lines: [
        line('RF 2', 'left gate', '23 dB', '', '22 nF / 1 MΩ', 'waveform generator B'),
        line('DC 5', 'drain', '', 'RC 10 kHz', '', 'current amplifier CAL-0177'),
      ],
    });
    await insertCooldown(tx, places.cooldowns.brine12, places.books.pumps, lead, {
      name: 'Brine 12',
      cryostat: 'Brine, dilution refrigerator',
      startedOn: day(16),
      endedOn: null,
      baseTemperature: '12 mK',
      remarks: 'Invented.',
      deviceIds: [places.devices.c7, places.devices.d2],
      lines: [
        line('RF 2', 'left gate', '23 dB', '', '22 nF / 1 MΩ', 'waveform generator B'),
        line('DC 5', 'drain', '', 'RC 10 kHz', '', 'current amplifier CAL-0177'),
      ],
    });
  });
  return places;
}
