/** The largest files that are taken, in bytes. Apart from the schemas, so that the browser can ask without them. */
export const maxTraceBytes = 200_000_000;
export const maxPictureBytes = 20_000_000;
