import { describe, expect, test } from 'vitest';
import { readMailAddress } from '../../../shared/domain/mail-address.ts';

/*
 * Sources: RFC 5321, 4.1.2 (dot-string, domain) and 4.5.3.1 (64 octets of local part, 254 of an address by RFC 3696 erratum
 * 1690); RFC 6531, 3.3 (UTF-8 in both parts); examples of RFC 6532 and of the Universal Acceptance test set's scripts,
 * written from memory.
 */
describe('an e-mail address', () => {
  test.each([
    ['on-call@hospital.example', 'on-call@hospital.example'],
    [' On.Call+ed@Hospital.Example ', 'On.Call+ed@hospital.example'],
    ["o'neil_1@a.b-c.example", "o'neil_1@a.b-c.example"],
    ['用户@例え.テスト', '用户@例え.テスト'],
    ['δοκιμή@παράδειγμα.δοκιμή', 'δοκιμή@παράδειγμα.δοκιμή'],
    ['अजय@डाटा.भारत', 'अजय@डाटा.भारत'],
    ['nachtdienst@klinik-münchen.example', 'nachtdienst@klinik-münchen.example'],
    // A letter and a combining accent are one address with the composed letter (NFC).
    ['e\u0301quipe@h.example', 'équipe@h.example'],
    [`${'a'.repeat(64)}@h.example`, `${'a'.repeat(64)}@h.example`],
  ])('%s is read', (text, address) => {
    expect(readMailAddress(text)).toBe(address);
  });

  test.each([
    '',
    '@',
    'nobody',
    '@h.example',
    'a@',
    'a@host',
    'a@h..example',
    'a@-h.example',
    'a@h-.example',
    'a@h.example.',
    'a@127.0.0.1',
    'a@[127.0.0.1]',
    '.a@h.example',
    'a.@h.example',
    'a..b@h.example',
    'a b@h.example',
    'a@b@h.example',
    '"a b"@h.example',
    'A <a@h.example>',
    'a@h.example, b@h.example',
    'a@h.example;b@h.example',
    'a@h.example\r\nBcc: b@h.example',
    'a\n@h.example',
    'a\u0000@h.example',
    'a\u2028@h.example',
    'a\u200b@h.example',
    'a(comment)@h.example',
    `${'a'.repeat(65)}@h.example`,
    // 33 letters of two octets.
    `${'é'.repeat(33)}@h.example`,
    `a@${'b'.repeat(64)}.example`,
    `a@${'bbbbbbbbb.'.repeat(25)}example`,
  ])('%j is none', (text) => {
    expect(readMailAddress(text)).toBeNull();
  });
});
