import type { LayDocument } from '$lib/lay/document';

/*
 * Moves that the server has not acknowledged yet, kept in the browser's own database so that neither a closed tab nor
 * a lost connection loses them. One record a person and lay.
 */

/** A save that was sent and may or may not have arrived: it is sent again under the same id. */
export interface SentSave<Document = LayDocument> {
  readonly saveId: string;
  readonly version: number;
  readonly document: Document;
}

export interface UnsavedMoves<Document = LayDocument> {
  /** The version and document that the moves were made from. */
  readonly base: { readonly version: number; readonly document: Document };
  readonly document: Document;
  readonly sent: SentSave<Document> | null;
  /** When the last of them was made, UTC milliseconds. */
  readonly movedAt: number;
}

/** Where unsaved moves are kept; the browser's database, or memory in tests. */
export interface MovesStore<Document = LayDocument> {
  read(key: string): Promise<UnsavedMoves<Document> | null>;
  write(key: string, moves: UnsavedMoves<Document>): Promise<void>;
  forget(key: string): Promise<void>;
}

const DATABASE = 'warpwise';
const STORE = 'unsaved-moves';

function settled<T>(request: IDBRequest<T>): Promise<T> {
  return new Promise((resolve, reject) => {
    request.onsuccess = () => resolve(request.result);
    request.onerror = () => reject(request.error ?? new Error('The browser refused to keep the moves'));
  });
}

let opened: Promise<IDBDatabase> | null = null;

function open(): Promise<IDBDatabase> {
  if (opened) return opened;
  const request = indexedDB.open(DATABASE, 1);
  request.onupgradeneeded = () => request.result.createObjectStore(STORE);
  opened = settled(request);
  // A failed opening is tried again at the next move.
  opened.catch(() => (opened = null));
  return opened;
}

async function inStore<T>(
  mode: IDBTransactionMode,
  work: (store: IDBObjectStore) => IDBRequest<T>
): Promise<T> {
  const database = await open();
  return settled(work(database.transaction(STORE, mode).objectStore(STORE)));
}

/** The browser's own database. Each call rejects where the browser refuses it (private windows, full disks). */
export function browserStore<Document>(): MovesStore<Document> {
  return {
    read: async (key) =>
      ((await inStore('readonly', (store) => store.get(key))) as UnsavedMoves<Document> | undefined) ?? null,
    write: async (key, moves) => void (await inStore('readwrite', (store) => store.put(moves, key))),
    forget: async (key) => void (await inStore('readwrite', (store) => store.delete(key)))
  };
}

export const browserMoves: MovesStore = browserStore();

/** The key of a person's moves on a lay. */
export function movesKey(user: string, lay: string): string {
  return `${user}/${lay}`;
}
