import { deviceSchema } from '@/lib/schemas/laboratory';
import { withAccess } from '@/server/access/route';
import { createDevice, listDevices } from '@/server/devices/service';

export const GET = withAccess({ action: 'notebook.read', param: 'code' }, async ({ scope }) => ({
  devices: await listDevices(scope.person.id, scope.notebook.id),
}));
export const POST = withAccess({ action: 'device.create', param: 'code', body: deviceSchema }, ({ scope, body }) =>
  createDevice(scope.notebook.id, scope.person.id, body),
);
