import { keepKeyUse } from '../accounts/site-key-use';
import { type Ground } from '../ground';
import { exchangeAnswers } from './exchange-answers';
import { type Answers } from './questions';

/**
 * What answers the HTTP thread's questions, made at the writer's start, before it says that it is ready: a feature that must first read what
 * is stored does so in its own function here, and keeps up by `ground.onCommitted`.
 */
export const makeAnswers = (ground: Ground): Answers | Promise<Answers> => ({
  ...exchangeAnswers(ground),
  'site-key:used': ({ keyId }) => keepKeyUse(ground, keyId),
});
