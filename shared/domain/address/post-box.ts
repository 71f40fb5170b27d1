const POST_BOX =
  /\b(?:p\.?\s*o\.?\s*box|post\s+office\s+box|po\s*bx|p\.?o\.?b)\b\.?\s*(?:#|no\.?|number)?\s*[a-z]?\d*/;

/** Takes a post box out of plain text; what is left may still say where somebody lives. */
export function withoutPostBox(plain: string): { rest: string; hadBox: boolean } {
  const rest = plain.replace(POST_BOX, ' ');
  return { rest, hadBox: rest !== plain };
}

/** Whether the text names a post box and no house that could be visited. */
export function isOnlyPostBox(text: string): boolean {
  const { rest, hadBox } = withoutPostBox(text.toLowerCase());
  return hadBox && !/\d/.test(rest.replace(/\b\d{5}(-\d{4})?\s*$/, ''));
}
