/** A piece of a text: words, and for a link of ours the address behind it on the server that is open. */
export interface Piece {
  readonly text: string;
  readonly href: string | undefined;
}

const ADDRESS = /(https?:\/\/[^\s<>"]+)/;
const OURS = /^https?:\/\/[^/]+(\/(?:invitation|new-password)#[\w-]+)$/;

/**
 * Takes the text of a kept mail apart at its links: they are followed on the server that is open, by whichever of its names the mail says.
 * Every other address stays words.
 */
export function withLinks(text: string): readonly Piece[] {
  return text.split(ADDRESS).map((piece) => ({ text: piece, href: OURS.exec(piece)?.[1] }));
}
