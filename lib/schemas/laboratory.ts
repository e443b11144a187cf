import { z } from 'zod';

const word = z.string().trim().max(200);
const name = z.string().trim().min(1, 'Give it a name.').max(80);
const lengthNm = z.number().positive('A length is positive.').max(1e9).nullable();

export const gateSchema = z.object({ name, purpose: word, widthNm: lengthNm, lengthNm }).strict();

export const deviceSchema = z
  .object({
    name,
    lot: word,
    wafer: word,
    die: word,
    material: word,
    dimensions: z.string().trim().max(500),
    remarks: z.string().trim().max(4000),
    gates: z.array(gateSchema).max(100),
  })
  .strict();

export const lineSchema = z
  .object({ name, contact: word, attenuation: word, filter: word, biasTee: word, instrument: word })
  .strict();

export const cooldownSchema = z
  .object({
    name,
    cryostat: z.string().trim().min(1, 'Name the cryostat.').max(120),
    startedOn: z.iso.date('Give the day it started.'),
    endedOn: z.iso.date().nullable(),
    baseTemperature: z.string().trim().max(80),
    remarks: z.string().trim().max(4000),
    deviceIds: z.array(z.uuid()).max(50),
    lines: z.array(lineSchema).max(200),
  })
  .strict()
  .refine((c) => !c.endedOn || c.endedOn >= c.startedOn, {
    message: 'A cooldown ends after it starts.',
    path: ['endedOn'],
  });

export type DeviceInput = z.infer<typeof deviceSchema>;
export type CooldownInput = z.infer<typeof cooldownSchema>;

export type DeviceDto = DeviceInput & {
  id: string;
  notebook: string;
  revision: number;
  cooldowns: { id: string; name: string }[];
};
export type DeviceLine = {
  id: string;
  notebook: string;
  name: string;
  material: string;
  gates: number;
  entries: number;
  cooldowns: number;
};
export type CooldownDto = Omit<CooldownInput, 'deviceIds'> & {
  id: string;
  notebook: string;
  revision: number;
  devices: { id: string; name: string }[];
};
export type CooldownLine = {
  id: string;
  notebook: string;
  name: string;
  cryostat: string;
  startedOn: string;
  endedOn: string | null;
  baseTemperature: string;
  devices: string[];
  entries: number;
};
