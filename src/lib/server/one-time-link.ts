import { Problem } from './problem';

/** What a one-time link that does not work (any more) is answered with; the reasons are not told apart. */
export function linkDead(): Problem {
  return new Problem(
    410,
    'link-dead',
    'This link does not work any more',
    'It was used already, is too old, or was not copied whole. Ask for a new one.'
  );
}
