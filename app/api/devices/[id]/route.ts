import { z } from 'zod';
import { deviceSchema } from '@/lib/schemas/laboratory';
import { withAccess } from '@/server/access/route';
import { changeDevice, readDevice } from '@/server/devices/service';

const bodySchema = z.object({ revision: z.number().int(), device: deviceSchema }).strict();

export const GET = withAccess({ action: 'device.read' }, ({ scope }) => readDevice(scope.deviceId));
export const PUT = withAccess({ action: 'device.change', body: bodySchema }, ({ scope, body }) =>
  changeDevice(scope.deviceId, body.revision, body.device),
);
