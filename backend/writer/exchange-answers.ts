import { answerTo } from '../api/answer';
import { allRoutes } from '../app';
import { type Ground } from '../ground';
import { type Answers } from './questions';
import { receivedExchange } from './sent-exchange';

/** Answers the requests that change something, each by its route. */
export function exchangeAnswers(ground: Ground): Pick<Answers, 'http:exchange'> {
  const ways = new Map(allRoutes(ground).map((served) => [`${served.route.method} ${served.route.path}`, served]));
  return {
    'http:exchange': (sent) => {
      const served = ways.get(`${sent.method} ${sent.routePath}`);
      if (!served) throw new Error(`${sent.method} ${sent.routePath} is not served here`);
      return answerTo(served, receivedExchange(sent), ground);
    },
  };
}
