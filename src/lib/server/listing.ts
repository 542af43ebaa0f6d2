import type { Knex } from 'knex';

/*
 * How lists are asked for: search, sort and page, read from the address of the page.
 */

export interface Listing<Sort extends string = string> {
  readonly search: string;
  readonly sort: Sort;
  readonly descending: boolean;
  /** From 1. */
  readonly page: number;
  readonly pageSize: number;
}

export interface Page<Row> {
  readonly rows: readonly Row[];
  readonly total: number;
  readonly page: number;
  readonly pageSize: number;
  /** As the address says it: 'due' or '-due'. */
  readonly sort: string;
  readonly search: string;
}

/** The listing that an address asks for; what it does not say or says wrongly is the default. */
export function readListing<Sort extends string>(
  params: URLSearchParams,
  sorts: readonly Sort[],
  standard: Sort | `-${Sort}`,
  pageSize = 50
): Listing<Sort> {
  const asked = params.get('sort') ?? standard;
  const key = asked.replace(/^-/, '');
  const known = sorts.find((sort) => sort === key);
  const page = Number(params.get('page') ?? 1);
  return {
    search: (params.get('q') ?? '').trim().slice(0, 100),
    sort: known ?? (standard.replace(/^-/, '') as Sort),
    descending: known ? asked.startsWith('-') : standard.startsWith('-'),
    page: Number.isInteger(page) && page >= 1 && page <= 1_000_000 ? page : 1,
    pageSize
  };
}

/** The sort of a listing as the address says it. */
export function sortText(listing: Listing): string {
  return (listing.descending ? '-' : '') + listing.sort;
}

/** Narrows `query` to rows where one of `columns` contains the text, upper and lower case alike (ASCII). */
export function containing(query: Knex.QueryBuilder, columns: readonly string[], text: string): void {
  if (!text) return;
  const pattern = `%${text.toLowerCase().replaceAll(/[\\%_]/g, (sign) => `\\${sign}`)}%`;
  query.where((either) => {
    for (const column of columns) either.orWhereRaw(`lower(??) like ? escape '\\'`, [column, pattern]);
  });
}

/**
 * One page of `query` with the count of all its rows. `columns` says what each sort goes by; ids break ties, so that
 * no row is shown twice. A page beyond the last is the last.
 */
export async function pageOf<Row, Sort extends string>(
  query: Knex.QueryBuilder,
  listing: Listing<Sort>,
  columns: Readonly<Record<Sort, string>>,
  idColumn: string
): Promise<Page<Row>> {
  const counted = await query.clone().clearSelect().count<{ total: number }[]>({ total: idColumn });
  const total = Number(counted[0]?.total ?? 0);
  const page = Math.min(listing.page, Math.max(1, Math.ceil(total / listing.pageSize)));
  const rows = (await query
    .clone()
    .orderByRaw('?? is null', [columns[listing.sort]])
    .orderBy(columns[listing.sort], listing.descending ? 'desc' : 'asc')
    .orderBy(idColumn)
    .limit(listing.pageSize)
    .offset((page - 1) * listing.pageSize)) as Row[];
  return { rows, total, page, pageSize: listing.pageSize, sort: sortText(listing), search: listing.search };
}
