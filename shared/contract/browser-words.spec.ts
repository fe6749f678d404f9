import { describe, expect, it } from 'vitest';
import { browserWords } from './browser-words';

describe('the words for a browser', () => {
  it.each([
    ['Mozilla/5.0 (X11; Linux x86_64) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/156.0.0.0 Safari/537.36', 'Chromium on Linux'],
    ['Mozilla/5.0 (Windows NT 10.0; Win64; x64) AppleWebKit/537.36 Chrome/156.0.0.0 Safari/537.36 Edg/156.0', 'Edge on Windows'],
    ['Mozilla/5.0 (iPhone; CPU iPhone OS 19_0 like Mac OS X) AppleWebKit/605 Version/19 Mobile Safari/604', 'Safari on iPhone'],
    ['curl/8.1', 'curl/8.1'],
    ['', 'A program without a name'],
  ])('%j', (userAgent, words) => {
    expect(browserWords(userAgent)).toBe(words);
  });
});
