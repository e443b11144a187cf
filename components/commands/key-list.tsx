'use client';

import { Dialog } from 'radix-ui';
import { keyTable } from '@/components/editor/key-table';

/** What the keyboard can do, by place. */
export function KeyList({ open, onOpenChange }: { open: boolean; onOpenChange: (open: boolean) => void }) {
  return (
    <Dialog.Root open={open} onOpenChange={onOpenChange}>
      <Dialog.Portal>
        <Dialog.Overlay className="dialog-shade" />
        <Dialog.Content className="dialog" aria-describedby={undefined}>
          <Dialog.Title>Keys</Dialog.Title>
          {keyTable.map(({ group, keys }) => (
            <table key={group} className="table-plain">
              <caption>{group}</caption>
              <tbody>
                {keys.map(([key, what]) => (
                  <tr key={key}>
                    <th scope="row">
                      <kbd>{key}</kbd>
                    </th>
                    <td>{what}</td>
                  </tr>
                ))}
              </tbody>
            </table>
          ))}
          <Dialog.Close className="press">Close</Dialog.Close>
        </Dialog.Content>
      </Dialog.Portal>
    </Dialog.Root>
  );
}
