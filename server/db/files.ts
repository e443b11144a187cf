import 'server-only';
import fs from 'node:fs/promises';
import path from 'node:path';

/** Makes the names in a folder durable. */
export async function syncFolder(folder: string): Promise<void> {
  const handle = await fs.open(folder, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Fsyncs every file and folder below `root`. */
export async function syncTree(root: string): Promise<void> {
  for (const item of await fs.readdir(root, { withFileTypes: true })) {
    const full = path.join(root, item.name);
    if (item.isDirectory()) await syncTree(full);
    else if (item.isFile()) {
      const handle = await fs.open(full, 'r');
      try {
        await handle.sync();
      } finally {
        await handle.close();
      }
    }
  }
  await syncFolder(root);
}
