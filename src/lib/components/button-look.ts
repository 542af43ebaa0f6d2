export type ButtonKind = 'primary' | 'quiet' | 'danger';

const shape =
  'inline-flex items-center justify-center gap-2 rounded border font-medium no-underline ' +
  'disabled:cursor-not-allowed disabled:opacity-50 aria-disabled:opacity-50';

const looks: Record<ButtonKind, string> = {
  primary: 'border-woad bg-woad text-bleached hover:bg-charcoal hover:border-charcoal',
  quiet: 'border-hem bg-bleached text-charcoal hover:border-ash',
  danger: 'border-madder bg-bleached text-madder hover:bg-madder hover:text-bleached'
};

/** The classes of a button or of a link that looks like one. */
export function buttonClass(kind: ButtonKind, small = false): string {
  return `${shape} ${looks[kind]} ${small ? 'min-h-9 px-3 py-1 text-small' : 'min-h-11 px-4 py-2 text-body'}`;
}
