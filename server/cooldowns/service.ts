import 'server-only';
import { randomUUID } from 'node:crypto';
import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm';
import { AppError } from '@/lib/errors/app-error';
import type { CooldownDto, CooldownInput, CooldownLine } from '@/lib/schemas/laboratory';
import { getDb, type Tx } from '@/server/db/client';
import { cooldown, cooldownDevice, cooldownLine, device } from '@/server/db/schema/laboratory';
import { notebook, notebookMember } from '@/server/db/schema/notebooks';

/** Cooldowns of the notebooks that the person is a member of, newest first; with `notebookId` of that one only. */
export async function listCooldowns(personId: string, notebookId: string | null = null): Promise<CooldownLine[]> {
  const db = await getDb();
  const rows = await db
    .select({
      row: cooldown,
      code: notebook.code,
      entries: sql<number>`(select count(*) from entry where entry.cooldown_id = ${cooldown.id})`,
    })
    .from(cooldown)
    .innerJoin(notebook, eq(notebook.id, cooldown.notebookId))
    .innerJoin(
      notebookMember,
      and(eq(notebookMember.notebookId, cooldown.notebookId), eq(notebookMember.userId, personId)),
    )
    .where(notebookId === null ? sql`true` : eq(cooldown.notebookId, notebookId))
    .orderBy(desc(cooldown.startedOn));
  const ids = rows.map(({ row }) => row.id);
  const devices =
    ids.length === 0
      ? []
      : await db
          .select({ cooldownId: cooldownDevice.cooldownId, name: device.name })
          .from(cooldownDevice)
          .innerJoin(device, eq(device.id, cooldownDevice.deviceId))
          .where(inArray(cooldownDevice.cooldownId, ids))
          .orderBy(asc(device.name));
  return rows.map(({ row, code, entries }) => ({
    id: row.id,
    notebook: code,
    name: row.name,
    cryostat: row.cryostat,
    startedOn: row.startedOn,
    endedOn: row.endedOn,
    baseTemperature: row.baseTemperature,
    devices: devices.filter((d) => d.cooldownId === row.id).map((d) => d.name),
    entries: Number(entries),
  }));
}

export async function readCooldown(cooldownId: string): Promise<CooldownDto> {
  const db = await getDb();
  const [row] = await db
    .select({ cooldown, code: notebook.code })
    .from(cooldown)
    .innerJoin(notebook, eq(notebook.id, cooldown.notebookId))
    .where(eq(cooldown.id, cooldownId));
  const lines = await db
    .select()
    .from(cooldownLine)
    .where(eq(cooldownLine.cooldownId, cooldownId))
    .orderBy(asc(cooldownLine.position));
  const devices = await db
    .select({ id: device.id, name: device.name })
    .from(cooldownDevice)
    .innerJoin(device, eq(device.id, cooldownDevice.deviceId))
    .where(eq(cooldownDevice.cooldownId, cooldownId))
    .orderBy(asc(device.name));
  const { id, name, cryostat, startedOn, endedOn, baseTemperature, remarks, revision } = row.cooldown;
  return {
    id,
    notebook: row.code,
    name,
    cryostat,
    startedOn,
    endedOn,
    baseTemperature,
    remarks,
    revision,
    devices,
    lines: lines.map(({ name: lineName, contact, attenuation, filter, biasTee, instrument }) => ({
      name: lineName,
      contact,
      attenuation,
      filter,
      biasTee,
      instrument,
    })),
  };
}

export async function createCooldown(
  notebookId: string,
  personId: string,
  input: CooldownInput,
): Promise<{ id: string }> {
  return (await getDb()).transaction((tx) => insertCooldown(tx, randomUUID(), notebookId, personId, input));
}

export async function insertCooldown(
  tx: Tx,
  id: string,
  notebookId: string,
  personId: string,
  input: CooldownInput,
): Promise<{ id: string }> {
  const { deviceIds, lines, ...facts } = input;
  await tx.insert(cooldown).values({ id, notebookId, createdBy: personId, ...facts });
  await insertParts(tx, id, notebookId, deviceIds, lines);
  return { id };
}

/** @throws AppError conflict where somebody changed the cooldown since `revision`. */
export async function changeCooldown(
  scope: { cooldownId: string; notebookId: string },
  revision: number,
  input: CooldownInput,
): Promise<{ revision: number }> {
  const { deviceIds, lines, ...facts } = input;
  return (await getDb()).transaction(async (tx) => {
    const changed = await tx
      .update(cooldown)
      .set({ ...facts, revision: revision + 1 })
      .where(and(eq(cooldown.id, scope.cooldownId), eq(cooldown.revision, revision)))
      .returning({ revision: cooldown.revision });
    if (changed.length === 0)
      throw new AppError(
        'conflict',
        'Somebody changed this cooldown meanwhile. Nothing was stored; open it in another tab and compare.',
      );
    await tx.delete(cooldownDevice).where(eq(cooldownDevice.cooldownId, scope.cooldownId));
    await tx.delete(cooldownLine).where(eq(cooldownLine.cooldownId, scope.cooldownId));
    await insertParts(tx, scope.cooldownId, scope.notebookId, deviceIds, lines);
    return { revision: changed[0].revision };
  });
}

async function insertParts(
  tx: Tx,
  cooldownId: string,
  notebookId: string,
  deviceIds: string[],
  lines: CooldownInput['lines'],
): Promise<void> {
  if (deviceIds.length > 0) {
    const own = await tx
      .select({ id: device.id })
      .from(device)
      .where(and(inArray(device.id, deviceIds), eq(device.notebookId, notebookId)));
    if (own.length !== new Set(deviceIds).size)
      throw new AppError('invalid', 'A device of the list is not one of this notebook.', { field: 'deviceIds' });
    await tx.insert(cooldownDevice).values(own.map(({ id }) => ({ cooldownId, deviceId: id })));
  }
  if (lines.length > 0)
    await tx
      .insert(cooldownLine)
      .values(lines.map((line, position) => ({ id: randomUUID(), cooldownId, position, ...line })));
}
