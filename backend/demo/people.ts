/** Someone of the demo: a fictional person, an address of RFC 2606's example.org, and the role that they show. */
export interface DemoPerson {
  readonly role: 'coordinator' | 'analyst' | 'reviewer' | 'operator';
  readonly email: string;
  readonly name: string;
  /** The sites of an operator. */
  readonly sites?: readonly string[];
}

/** One for each role, and a second reviewer, since a candidate wants two signatures. */
export const PEOPLE: readonly DemoPerson[] = [
  { role: 'coordinator', email: 'coordinator@example.org', name: 'Odalys Brandt' },
  { role: 'analyst', email: 'analyst@example.org', name: 'Tevin Asare' },
  { role: 'reviewer', email: 'reviewer@example.org', name: 'Ruta Halloran' },
  { role: 'reviewer', email: 'second.reviewer@example.org', name: 'Pavel Imbert' },
  { role: 'operator', email: 'operator@example.org', name: 'Noor Castellan', sites: ['OMB', 'GIL'] },
];
