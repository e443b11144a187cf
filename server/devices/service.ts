import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, eq, sql } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { DeviceDto, DeviceInput, DeviceLine } from '@/lib/schemas/laboratory';
import { getDb, type Tx } from '@/server/db/client';
import { cooldown, cooldownDevice, device, gate } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';

/** Devices of the notebooks that the person is a member of; with `notebookId` of that one only. */
export async function listDevices(personId: string, notebookId: string | null = null): Promise<DeviceLine[]> {
  const rows = await (
    await getDb()
  )
    .select({
      id: device.id,
      notebook: notebook.code,
      name: device.name,
      material: device.material,
      gates: sql<number>`(select count(*) from gate where gate.device_id = ${device.id})`,
      entries: sql<number>`(select count(*) from entry_device where entry_device.device_id = ${device.id})`,
      cooldowns: sql<number>`(select count(*) from cooldown_device where cooldown_device.device_id = ${device.id})`,
    })
    .from(device)
    .innerJoin(notebook, eq(notebook.id, device.notebookId))
    .innerJoin(
      notebookMember,
      and(eq(notebookMember.notebookId, device.notebookId), eq(notebookMember.userId, personId)),
    )
    .where(notebookId === null ? sql`true` : eq(device.notebookId, notebookId))
    .orderBy(asc(device.name));
  return rows.map((row) => ({
    ...row,
    gates: Number(row.gates),
    entries: Number(row.entries),
    cooldowns: Number(row.cooldowns),
  }));
}

export async function readDevice(deviceId: string): Promise<DeviceDto> {
  const db = await getDb();
  const [row] = await db
    .select({ device, code: notebook.code })
    .from(device)
    .innerJoin(notebook, eq(notebook.id, device.notebookId))
    .where(eq(device.id, deviceId));
  const gates = await db.select().from(gate).where(eq(gate.deviceId, deviceId)).orderBy(asc(gate.position));
  const cooldowns = await db
    .select({ id: cooldown.id, name: cooldown.name })
    .from(cooldownDevice)
    .innerJoin(cooldown, eq(cooldown.id, cooldownDevice.cooldownId))
    .where(eq(cooldownDevice.deviceId, deviceId))
    .orderBy(asc(cooldown.startedOn));
  const { id, name, lot, wafer, die, material, dimensions, remarks, revision } = row.device;
  return {
    id,
    notebook: row.code,
    name,
    lot,
    wafer,
    die,
    material,
    dimensions,
    remarks,
    revision,
    gates: gates.map(({ name: gateName, purpose, widthNm, lengthNm }) => ({
      name: gateName,
      purpose,
      widthNm,
      lengthNm,
    })),
    cooldowns,
  };
}

export async function createDevice(notebookId: string, personId: string, input: DeviceInput): Promise<{ id: string }> {
  return (await getDb()).transaction((tx) => insertDevice(tx, randomUUID(), notebookId, personId, input));
}

export async function insertDevice(
  tx: Tx,
  id: string,
  notebookId: string,
  personId: string,
  input: DeviceInput,
): Promise<{ id: string }> {
  const { gates, ...facts } = input;
  await tx.insert(device).values({ id, notebookId, createdBy: personId, ...facts });
  await insertGates(tx, id, gates);
  return { id };
}

/** @throws AppError conflict where somebody changed the device since `revision`. */
export async function changeDevice(
  deviceId: string,
  revision: number,
  input: DeviceInput,
): Promise<{ revision: number }> {
  const { gates, ...facts } = input;
  return (await getDb()).transaction(async (tx) => {
    const changed = await tx
      .update(device)
      .set({ ...facts, revision: revision + 1 })
      .where(and(eq(device.id, deviceId), eq(device.revision, revision)))
      .returning({ revision: device.revision });
    if (changed.length === 0)
      throw new AppError(
        'conflict',
        'Somebody changed this device meanwhile. Nothing was stored; open it in another tab and compare.',
      );
    await tx.delete(gate).where(eq(gate.deviceId, deviceId));
    await insertGates(tx, deviceId, gates);
    return { revision: changed[0].revision };
  });
}

async function insertGates(tx: Tx, deviceId: string, gates: DeviceInput['gates']): Promise<void> {
  if (gates.length === 0) return;
  await tx.insert(gate).values(gates.map((g, position) => ({ id: randomUUID(), deviceId, position, ...g })));
}
