import { describe, expect, it } from 'vitest';
import { readConfig } from '$lib/server/config';

describe('the configuration', () => {
  it('has a safe default for everything', () => {
    expect(readConfig({})).toMatchObject({
      databaseFile: 'data/warpwise.sqlite',
      origin: 'http://localhost:3000',
      secureCookies: true,
      smtpUrl: null,
      smtpPlain: false,
      demo: false,
      demoMailPage: null
    });
  });

  it('leaves cookies insecure only where the address is plain http, or where it is asked to', () => {
    expect(readConfig({ ORIGIN: 'https://warpwise.example' }).secureCookies).toBe(true);
    expect(readConfig({ ORIGIN: 'http://10.0.0.2:3000' }).secureCookies).toBe(false);
    expect(readConfig({ ORIGIN: 'http://10.0.0.2', WARPWISE_SECURE_COOKIES: 'true' }).secureCookies).toBe(
      true
    );
    expect(readConfig({ WARPWISE_SECURE_COOKIES: 'false' }).secureCookies).toBe(false);
  });

  it('names what does not fit', () => {
    expect(() => readConfig({ PORT: 'eighty' })).toThrow('PORT');
    expect(() => readConfig({ WARPWISE_SMTP_URL: 'https://mail.example' })).toThrow('WARPWISE_SMTP_URL');
    expect(() => readConfig({ WARPWISE_SECURE_COOKIES: 'maybe' })).toThrow('WARPWISE_SECURE_COOKIES');
  });

  it('takes an empty variable for none, and keeps only the origin of an address', () => {
    expect(readConfig({ ORIGIN: '', PORT: '4000' }).origin).toBe('http://localhost:4000');
    expect(readConfig({ ORIGIN: 'https://warpwise.example/some/path' }).origin).toBe(
      'https://warpwise.example'
    );
  });
});
