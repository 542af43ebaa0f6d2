/** Deep equality of plain JSON, whatever the order of keys. */
export function same(a: unknown, b: unknown): boolean {
  if (a === b) return true;
  if (typeof a !== 'object' || typeof b !== 'object' || a === null || b === null) return false;
  if (Array.isArray(a) !== Array.isArray(b)) return false;
  const left = Object.entries(a);
  const right = b as Readonly<Record<string, unknown>>;
  return (
    left.length === Object.keys(right).length &&
    left.every(([key, value]) => key in right && same(value, right[key]))
  );
}
