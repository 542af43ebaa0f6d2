/*
 * Ticks of the cutting table that the server has not got yet: they stay in the browser through a lost connection and a closed page, and are
 * sent again until they are taken. The last tick of a piece counts.
 */

type Ticks = Record<string, boolean>;
type Send = (ticks: { placement: string; cut: boolean }[]) => Promise<'taken' | 'later' | 'refused'>;

export class TickQueue {
  readonly #key: string;
  readonly #send: Send;
  readonly #told: (waiting: number, refused: boolean) => void;
  #sending = false;

  constructor(lay: string, send: Send, told: (waiting: number, refused: boolean) => void) {
    this.#key = `ticks ${lay}`;
    this.#send = send;
    this.#told = told;
  }

  /** What waits, by placement. */
  waiting(): Ticks {
    try {
      return JSON.parse(localStorage.getItem(this.#key) ?? '{}') as Ticks;
    } catch {
      return {};
    }
  }

  add(placement: string, cut: boolean): void {
    this.#keep({ ...this.waiting(), [placement]: cut });
    void this.flush();
  }

  /** Sends what waits; what came in meanwhile is sent after it. */
  async flush(): Promise<void> {
    if (this.#sending) return;
    this.#sending = true;
    try {
      for (;;) {
        const ticks = this.waiting();
        const list = Object.entries(ticks).map(([placement, cut]) => ({ placement, cut }));
        if (list.length === 0) return this.#told(0, false);
        const answer = await this.#send(list);
        if (answer === 'later') return this.#told(list.length, false);
        const now = this.waiting();
        for (const { placement, cut } of list) if (now[placement] === cut) delete now[placement];
        this.#keep(now);
        if (answer === 'refused') return this.#told(Object.keys(now).length, true);
      }
    } finally {
      this.#sending = false;
    }
  }

  #keep(ticks: Ticks): void {
    if (Object.keys(ticks).length === 0) localStorage.removeItem(this.#key);
    else localStorage.setItem(this.#key, JSON.stringify(ticks));
  }
}
