import { describe, expect, it } from 'vitest';
import { fitsHash, hashPassword, passwordFault } from '$lib/server/passwords';

describe('a stored password', () => {
  it('is argon2id with its parameters, salted', async () => {
    const [one, two] = await Promise.all([
      hashPassword('green kettle 44 moons'),
      hashPassword('green kettle 44 moons')
    ]);
    expect(one).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    expect(one).not.toBe(two);
    expect(await fitsHash(one, 'green kettle 44 moons')).toBe(true);
    expect(await fitsHash(one, 'green kettle 44 moon')).toBe(false);
  });

  it('fits when the same letters are typed in another form', async () => {
    expect(await fitsHash(await hashPassword('Ångström au café'), 'Ångström au café')).toBe(true);
  });

  it('fits nobody when there is no account', async () => {
    expect(await fitsHash(null, 'nobody has this password')).toBe(false);
  });
});

describe('the choice of a password', () => {
  it.each([
    'correct horse battery staple',
    'vxq7Lm2#tRz9',
    'наперсток и 7 катушек',
    'purple kettle under the bridge',
    'x'.repeat(5) + 'Qm4 vault hymn zebra',
    '   spaces are welcome   '
  ])('allows %s', (password) => expect(passwordFault(password)).toBeNull());

  it.each([
    ['short', 'elevenchars'],
    ['a word and figures', 'password2026'],
    ['a word in disguise', 'P@ssw0rd2026!!'],
    ['a word twice', 'welcomewelcome'],
    ['two words', 'iloveyou-princess1'],
    ['a row of keys', 'qwertyuiop12'],
    ['rows of keys', 'qwertyasdfgh12'],
    ['rows backwards', 'poiuytrewq99'],
    ['a zigzag', '1qaz2wsx3edc'],
    ['figures', '123456789012'],
    ['the alphabet', 'abcdefghijklm'],
    ['one key', 'aaaaaaaaaaaaaa'],
    ['a repeated piece', 'abc1abc1abc1abc1'],
    ['the product', 'Warpwise-2026'],
    ['the trade', 'sewing-fabric-1'],
    ['a date', '24.12.1990 24.12.1990'],
    ['signs only', '............!!!!']
  ])('refuses %s', (_why, password) => expect(passwordFault(password)).not.toBeNull());

  it('refuses what is made of the person or the studio', () => {
    const about = ['Rosamund Vale', 'rosamund@lindenrow.example', 'Linden Row'];
    expect(passwordFault('rosamundvale1', about)).not.toBeNull();
    expect(passwordFault('LindenRow 2026', about)).not.toBeNull();
    expect(passwordFault('rosamund@lindenrow.example', about)).not.toBeNull();
    expect(passwordFault('rosamund likes purple kettles', about)).toBeNull();
  });

  it('has a bound', () => {
    const phrase = 'kettle moon violin harbour ';
    expect(passwordFault(phrase.repeat(9))).toBeNull();
    expect(passwordFault(phrase.repeat(10))).toContain('256');
  });
});
