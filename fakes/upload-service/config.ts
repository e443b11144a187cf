/** What the stand-in for the hosted upload service is told. */
export type UploadServiceConfig = {
  /** Files lie under `<dataDir>/uploads`. */
  dataDir: string;
  /** The address it answers at, as in UPLOADTHING_INGEST_URL; signatures are checked against it, never against the request's host. */
  baseUrl: string;
  appId: string;
  apiKey: string;
  /** Most bytes it keeps altogether. */
  quotaBytes: number;
  /** A body that stays silent for so long is given up, and one that is slower than 1 KiB/s after so long. */
  idleMs: number;
  /** How long to wait for the application's answer to the callback. */
  callbackMs: number;
  /** Writes a piece of a file; exchanged only to try a full disk. */
  write?: (handle: import('node:fs/promises').FileHandle, bytes: Uint8Array, position: number) => Promise<void>;
};

/** A refusal of the service, with the status of its answer. */
export class ServiceRefusal extends Error {
  constructor(
    readonly status: number,
    message: string,
  ) {
    super(message);
    this.name = 'ServiceRefusal';
  }
}
