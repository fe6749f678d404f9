import { type Writer } from '../writer/questions';
import { type SiteDesk } from './site-desk';

/** The desk of sites as the HTTP thread has it: it asks the writer thread. */
export const writerDesk = ({ ask }: Pick<Writer, 'ask'>): SiteDesk => ({
  hello: (sender, software) => ask('site:hello', { sender, software }),
  batch: (sender, records) => ask('site:batch', { sender, records }),
  state: (sender, state) => ask('site:state', { sender, state }),
  bye: (connectionId, why) => ask('site:bye', { connectionId, why }),
});
