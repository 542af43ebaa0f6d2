import type { LayDocument } from '$lib/lay/document';
import type { PanelBook } from '$lib/lay/panel-book';
import type { Verdict } from '$lib/lay/verdict';

/*
 * The lay's routes of the API, typed. An answer that refuses is thrown as `Refusal`; no answer at all as `Offline`.
 */

/** The server said no, in words for the person. */
export class Refusal extends Error {
  constructor(
    readonly status: number,
    /** The last part of the problem's type: `lay-out-of-date`. */
    readonly type: string,
    detail: string,
    readonly extra: Readonly<Record<string, unknown>>
  ) {
    super(detail);
    this.name = 'Refusal';
  }
}

/** The server could not be reached, or is in trouble: trying again later may help. */
export class Offline extends Error {
  constructor(why: string) {
    super(why);
    this.name = 'Offline';
  }
}

export interface KeptRevision {
  readonly id: string;
  readonly number: number;
  readonly name: string;
  readonly hash: string;
  readonly releasedAt: number | null;
  readonly keptAt?: number;
  readonly keptBy?: string;
}

/** A lay as the server reads it for the Lay table. */
export interface LayOnServer {
  readonly id: string;
  readonly name: string;
  readonly state: 'open' | 'released' | 'cut';
  readonly chosen: boolean;
  readonly version: number;
  readonly document: LayDocument;
  readonly panels: PanelBook;
  readonly order: { readonly id: string; readonly number: number; readonly clientName: string };
  readonly cloth: {
    readonly id: string;
    readonly name: string;
    readonly colour: string;
    readonly pictureFile: string | null;
    readonly price?: {
      readonly minor: number;
      readonly unit: 'metre' | 'yard';
      readonly currency: string;
    } | null;
  };
  readonly verdict: Verdict | null;
  readonly verdictVersion: number | null;
  readonly revision: KeptRevision | null;
  readonly updatedAt: number;
}

/** What another person saved in the meantime. */
export interface SavedByOther<Document = LayDocument> {
  readonly version: number;
  readonly document: Document;
  readonly savedBy: string;
  readonly savedAt: number;
}

export interface SaveAnswer {
  readonly version: number;
  readonly savedAt: number;
}

/** Asks the server; its answer as JSON. */
export async function ask<T>(path: string, init: RequestInit): Promise<T> {
  let response: Response;
  try {
    response = await fetch(path, {
      ...init,
      headers: { 'content-type': 'application/json', accept: 'application/json' }
    });
  } catch (failure) {
    throw new Offline(failure instanceof Error ? failure.message : 'No connection');
  }
  if (response.status >= 500 || response.status === 429)
    throw new Offline(`The server answered ${response.status}`);
  const body: unknown = response.status === 204 ? null : await response.json();
  if (response.ok) return body as T;
  const { type = '', title = '', detail = '', ...extra } = (body ?? {}) as Record<string, unknown>;
  throw new Refusal(
    response.status,
    String(type).split('/').pop() ?? '',
    String(detail || title || `The server refused (${response.status}).`),
    extra
  );
}

export function post<T>(path: string, body: unknown): Promise<T> {
  return ask<T>(path, { method: 'POST', body: JSON.stringify(body) });
}

/** The largest body that a page may still send while it closes (the fetch standard's limit for keepalive). */
const KEEPALIVE_LIMIT = 60_000;

/** The server's side of one lay. */
export class LayServer {
  readonly #path: string;

  constructor(lay: string) {
    this.#path = `/api/lays/${encodeURIComponent(lay)}`;
  }

  read(): Promise<LayOnServer> {
    return ask(this.#path, { method: 'GET' });
  }

  /** Saves `document`, made from `version`. `closing`: the page is about to go away. */
  save(
    save: { version: number; saveId: string; document: LayDocument },
    closing = false
  ): Promise<SaveAnswer> {
    const body = JSON.stringify(save);
    return ask(this.#path, { method: 'PUT', body, keepalive: closing && body.length < KEEPALIVE_LIMIT });
  }

  check(version: number): Promise<{ version: number; verdict: Verdict }> {
    return post(`${this.#path}/check`, { version });
  }

  release(version: number, name: string): Promise<{ revision: KeptRevision }> {
    return post(`${this.#path}/release`, { version, name });
  }

  reopen(): Promise<{ version: number }> {
    return post(`${this.#path}/reopen`, {});
  }

  revisions(): Promise<KeptRevision[]> {
    return ask<KeptRevision[] | { revisions: KeptRevision[] }>(`${this.#path}/revisions`, {
      method: 'GET'
    }).then((answer) => ('revisions' in answer ? answer.revisions : answer));
  }

  keep(version: number, name: string): Promise<KeptRevision> {
    return post(`${this.#path}/revisions`, { version, name });
  }

  restore(
    number: number,
    version: number,
    saveId: string
  ): Promise<{ version: number; document: LayDocument }> {
    return post(`${this.#path}/restore`, { number, version, saveId });
  }

  duplicate(name: string): Promise<{ id: string }> {
    return post(`${this.#path}/duplicate`, { name });
  }

  choose(): Promise<unknown> {
    return post(`${this.#path}/choose`, {});
  }
}
