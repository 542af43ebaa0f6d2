/*
 * Words and keyboard walks that passwords are most often made of. A list of our own: well-known choices in a few
 * languages, then the product and its trade.
 */

export const commonWords: readonly string[] = `
  password passwort passwd passcode motdepasse contrasena senha parola wachtwoord heslo haslo salasana losenord
  admin administrator root user guest login access system server default changeme change secret private
  letmein welcome willkommen bienvenue hello hallo hola bonjour goodbye trustno trust open sesame enter
  iloveyou loveyou love liebe amour teamo forever always angel baby honey sweetheart darling princess prince
  dragon monkey tiger lion eagle wolf bear kitty puppy horse dolphin butterfly snoopy unicorn panda
  football fussball soccer baseball basketball hockey tennis cricket golf rugby volleyball champion winner
  sunshine summer winter spring autumn sommer herbst fruhling monday friday sunday january december
  master killer hunter ninja samurai shadow phantom ghost wizard warrior knight soldier pirate hero superhero
  michael jennifer jessica thomas daniel andrew charlie jordan maria anna laura sarah emily sophie alexander
  freedom family friends money lucky happy smile flower rainbow chocolate cookie banana orange cheese pepper
  computer internet laptop keyboard browser mobile phone apple mail email website online gamer player
  whatever nothing something abcd test testing tester demo example sample temp temporary
  warpwise warp weft tailor tailoring dressmaker dressmaking sewing sew stitch stitching fabric cloth textile
  thread needle bobbin scissors shears pattern fashion atelier couture boutique studio workroom cutter owner
`
  .trim()
  .split(/\s+/);

const rows = [
  'qwertyuiop',
  'asdfghjkl',
  'zxcvbnm',
  'qwertzuiop',
  'yxcvbnm',
  'azertyuiop',
  'qsdfghjklm',
  'wxcvbn',
  '1234567890',
  'abcdefghijklmnopqrstuvwxyz',
  // Columns of the keyboard, and the usual zigzag.
  '1qaz2wsx3edc4rfv5tgb6yhn7ujm',
  '1q2w3e4r5t6y7u8i9o0p',
  'q1w2e3r4t5y6u7i8o9p0',
  'qawsedrftgyhujikolp',
  'qazwsxedcrfvtgbyhnujm',
  'zaqxswcdevfrbgtnhymju'
];

/** Every stretch of at least four keys of a row, either way, the longest first. */
export const walks: readonly string[] = [
  ...new Set(
    rows
      .flatMap((row) => [row, [...row].reverse().join('')])
      .flatMap((row) =>
        Array.from({ length: row.length }, (_, from) =>
          Array.from({ length: row.length - from - 3 }, (_, more) => row.slice(from, from + 4 + more))
        ).flat()
      )
  )
].sort((a, b) => b.length - a.length);
