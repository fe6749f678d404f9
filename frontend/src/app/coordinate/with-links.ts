/** A piece of a text: words, or an address of this server that can be followed. */
export interface Piece {
  readonly text: string;
  readonly link: boolean;
}

/**
 * Takes a text apart at the addresses of one server.
 *
 * @param text of a mail
 * @param origin whose addresses become links; those of any other stay words
 */
export function withLinks(text: string, origin: string): readonly Piece[] {
  return text.split(/(https?:\/\/[^\s<>"]+)/).map((piece) => ({ text: piece, link: piece.startsWith(`${origin}/`) }));
}
