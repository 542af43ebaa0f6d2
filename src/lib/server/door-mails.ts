import { config } from './config';
import { composed, type Wording } from './mail-words';
import type { Message } from './outbox';
import type { Role } from './permissions';

/*
 * The mails of the door: what they say. Links are made from the configured address, never from a request.
 */

export const roleWords: Readonly<Record<Role, string>> = {
  owner: 'owner',
  patternMaker: 'pattern maker',
  cutter: 'cutter'
};

const to = (path: string): string => `${config.origin}${path}`;

/** A mail of the installation itself; `key` names the event. */
function message(template: string, key: string, recipient: string, wording: Wording): Message {
  return { studioId: null, dedupeKey: `${template} ${key}`, template, recipient, ...composed(wording) };
}

const notYou = 'If this was not you, do nothing: without the link nothing happens.';

export function signUpLink(key: string, email: string, name: string, studio: string, token: string): Message {
  return message('sign-up', key, email, {
    subject: 'Open your studio',
    paragraphs: [
      `Hello ${name},`,
      `you asked for a studio called “${studio}”. Choose a password, and it is yours. The link works once, within a day.`
    ],
    link: { word: 'Open the studio', href: to(`/sign-up/${token}`) },
    ending: [notYou]
  });
}

export function signUpKnown(key: string, email: string): Message {
  return message('sign-up-known', key, email, {
    subject: 'You have an account already',
    paragraphs: [
      'Hello,',
      'somebody, probably you, asked for a new studio with this address. It has an account already: sign in with it. A further studio can be opened there, under “Your studios”.',
      `Forgotten the password? Ask for a new one: ${to('/forgotten')}`
    ],
    link: { word: 'Sign in', href: to('/sign-in') },
    ending: ['If this was not you, nothing has changed.']
  });
}

export function resetLink(key: string, email: string, name: string, token: string): Message {
  return message('reset', key, email, {
    subject: 'A new password',
    paragraphs: [
      `Hello ${name},`,
      'choose a new password with this link. It works once, within an hour; you are then signed out everywhere.'
    ],
    link: { word: 'Choose a password', href: to(`/reset/${token}`) },
    ending: [notYou]
  });
}

export function passwordChanged(key: string, email: string, name: string): Message {
  return message('password-changed', key, email, {
    subject: 'Your password was changed',
    paragraphs: [
      `Hello ${name},`,
      'the password of your account was changed just now, and other places where you were signed in have been signed out.',
      `If this was not you, ask for a new password at once: ${to('/forgotten')}`
    ]
  });
}

export function invitationLink(
  key: string,
  studioId: string,
  email: string,
  by: string,
  studio: string,
  role: Role,
  token: string
): Message {
  return {
    ...message('invitation', key, email, {
      subject: `${by} invites you to ${studio}`,
      paragraphs: [
        'Hello,',
        `${by} would like you to work in the studio “${studio}” as ${roleWords[role]}. The link works once, within a week.`
      ],
      link: { word: 'See the invitation', href: to(`/invitation/${token}`) },
      ending: ['If you don’t know them, do nothing.']
    }),
    studioId
  };
}

export function newAddressLink(key: string, email: string, name: string, token: string): Message {
  return message('new-address', key, email, {
    subject: 'Is this your new address?',
    paragraphs: [
      `Hello ${name},`,
      'you want to sign in with this address from now on. Say so with this link; it works once, within a day.'
    ],
    link: { word: 'Use this address', href: to(`/new-address/${token}`) },
    ending: [notYou]
  });
}

export function newAddressTaken(key: string, email: string): Message {
  return message('new-address-taken', key, email, {
    subject: 'This address belongs to an account already',
    paragraphs: [
      'Hello,',
      'somebody, probably you, wanted to use this address for another account. It has an account of its own already, so nothing was changed.'
    ]
  });
}

export function addressChangeAsked(key: string, oldEmail: string, name: string, newEmail: string): Message {
  return message('address-change-asked', key, oldEmail, {
    subject: 'A new address was asked for',
    paragraphs: [
      `Hello ${name},`,
      `somebody who knows your password wants your account to use the address ${newEmail} from now on.`,
      `If this was not you, ask for a new password at once: ${to('/forgotten')}`
    ]
  });
}

export function addressChanged(key: string, oldEmail: string, name: string, newEmail: string): Message {
  return message('address-changed', key, oldEmail, {
    subject: 'Your address was changed',
    paragraphs: [
      `Hello ${name},`,
      `your account now uses the address ${newEmail}. This is the last mail to the old one.`,
      'If this was not you, tell the owner of your studio.'
    ]
  });
}
