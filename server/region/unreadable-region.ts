/** A file that was given as a region cannot be used; the message says what to do. */
export class UnreadableRegion extends Error {
  override readonly name = 'UnreadableRegion';
}
