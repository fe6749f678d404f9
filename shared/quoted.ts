const SHOWN_CHARACTERS = 60;

/** A value from outside as a message shows it: in quotes, on one line whatever it holds, and cut when it is long. */
export function quoted(text: string): string {
  return text.length > SHOWN_CHARACTERS ? `${JSON.stringify(text.slice(0, SHOWN_CHARACTERS))}...` : JSON.stringify(text);
}
