import { keepKeyUse } from '../accounts/site-key-use';
import { type Ground } from '../ground';
import { exchangeAnswers } from './exchange-answers';
import { type Answers } from './questions';
import { type Stream } from './stream';

/**
 * What answers the HTTP thread's questions, made at the writer's start, before it says that it is ready: a feature that must first read what
 * is stored does so in its own function, and keeps up by `ground.onCommitted`.
 */
export const makeAnswers = (ground: Ground, stream: Stream): Answers => ({
  ...exchangeAnswers(ground),
  ...stream.answers,
  'site-key:used': ({ keyId }) => keepKeyUse(ground, keyId),
});
