import type { SendFile } from './use-attachments';

/** The way of a file to the server. */
export const sendFile: SendFile = () =>
  Promise.reject(new Error('Files cannot be sent from this page yet. The text is not affected.'));
