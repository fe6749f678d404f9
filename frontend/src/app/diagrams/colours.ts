/** The colours of a picture that is drawn on a canvas or leaves the page, as the browser has resolved them. */
export interface Colours {
  readonly page: string;
  readonly sheet: string;
  readonly ink: string;
  readonly timelike: string;
  readonly spacelike: string;
  readonly undecided: string;
}

/** Reads the tokens where an element stands: light or dark, as it is there. */
export function coloursAt(element: HTMLElement): Colours {
  const probe = document.createElement('span');
  probe.hidden = true;
  element.append(probe);
  const read = (token: string): string => {
    probe.style.color = `var(--${token})`;
    return getComputedStyle(probe).color;
  };
  const colours = {
    page: read('page'),
    sheet: read('sheet'),
    ink: read('ink'),
    timelike: read('timelike'),
    spacelike: read('spacelike'),
    undecided: read('undecided'),
  };
  probe.remove();
  return colours;
}
