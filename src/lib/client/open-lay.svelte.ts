import type { Point } from '$lib/geometry/point';
import { snap } from '$lib/geometry/point';
import * as commands from '$lib/lay/commands';
import { boxOf, middleOf, type Edit } from '$lib/lay/edit';
import { exactOf } from '$lib/lay/exact';
import type { LayDocument } from '$lib/lay/document';
import {
  canRedo,
  canUndo,
  endGesture,
  record,
  redo,
  startHistory,
  undo,
  type History
} from '$lib/lay/history';
import { landing } from '$lib/lay/landing';
import { createLive, type Live } from '$lib/lay/live';
import { loose, type LoosePiece } from '$lib/lay/needs';
import { panelOf, type PanelBook } from '$lib/lay/panel-book';
import { pieceArea } from '$lib/lay/piece-area';
import { readingsOf } from '$lib/lay/readings';
import type { Readings, Verdict } from '$lib/lay/verdict';
import { nameOf } from '$lib/lay/wording';
import { formatAngle } from '$lib/units/angle';
import { formatLength, type LengthUnit } from '$lib/units/length';
import { firstFreePlace } from './first-free-place';
import { Handful } from './handful';
import { LayChecking } from './lay-checking.svelte';
import { LaySaving } from './lay-saving.svelte';
import { LayServer, Refusal, type KeptRevision, type LayOnServer } from './lay-server';
import { stepped, tablePieces, type TablePiece } from './table-pieces';
import { browserMoves, movesKey, type MovesStore } from './unsaved-moves';

/*
 * The lay that lies open on the table: its document with history, what is picked, what is in hand, its readings and
 * findings, and its saving. Components look at it; gestures and commands act on it.
 */

/** What the open lay needs of the world around it. */
export interface OpenLayWorld {
  readonly server: LayServer;
  readonly store: MovesStore;
  readonly user: string;
  /** In which lengths are read and typed. */
  readonly unit: LengthUnit;
  readonly now: () => number;
  readonly newId: () => string;
  readonly later: (work: () => void, milliseconds: number) => () => void;
}

/** The browser as it is. */
export function browserWorld(lay: string, user: string, unit: LengthUnit): OpenLayWorld {
  return {
    server: new LayServer(lay),
    store: browserMoves,
    user,
    unit,
    now: () => Date.now(),
    newId: () => crypto.randomUUID(),
    later: (work, milliseconds) => {
      const timer = setTimeout(work, milliseconds);
      return () => clearTimeout(timer);
    }
  };
}

export class OpenLay {
  readonly id: string;
  readonly book: PanelBook = $state.raw({});
  readonly world: OpenLayWorld;
  readonly saving: LaySaving;
  readonly checking: LayChecking;
  #live: Live | null = null;
  #cancelCatchUp: (() => void) | null = null;

  /** What the server says of the lay beside its document. */
  facts: Omit<LayOnServer, 'document' | 'panels' | 'version' | 'verdict' | 'verdictVersion'> = $state.raw()!;
  #history: History = $state.raw()!;
  /** Placements that the next command acts on, in the order in which they were picked. */
  picked: readonly string[] = $state.raw([]);
  /** Pieces lifted off the cloth or the Rail; null while the hands are empty. */
  inHand: Handful | null = $state.raw(null);
  /** How far they are carried, in millimetres. */
  carried: Point = $state.raw({ x: 0, y: 0 });
  /** The last thing that happened, for the live region and the line beneath the table. */
  said: { words: string; refused: boolean; count: number } = $state.raw({
    words: '',
    refused: false,
    count: 0
  });

  readonly document: LayDocument = $derived(this.#history.present.document);
  readonly pieces: readonly TablePiece[] = $derived(tablePieces(this.document, this.book));
  readonly loose: readonly LoosePiece[] = $derived(loose(this.document, this.book));
  readonly readings: Readings = $derived(readingsOf(this.document, this.book));
  readonly pickedPieces: readonly TablePiece[] = $derived.by(() => {
    const byId = indexById(this.pieces);
    return this.picked.flatMap((id) => byId.get(id) ?? []);
  });
  readonly readOnly: boolean = $derived(this.facts.state !== 'open');
  readonly canUndo: boolean = $derived(canUndo(this.#history));
  readonly canRedo: boolean = $derived(canRedo(this.#history));

  constructor(lay: LayOnServer, world: OpenLayWorld) {
    const { document, panels, version, verdict, verdictVersion, ...facts } = lay;
    this.id = lay.id;
    this.book = panels;
    this.world = world;
    this.facts = facts;
    this.#history = startHistory(document);
    this.saving = new LaySaving({ version, document }, lay.updatedAt, {
      server: world.server,
      store: world.store,
      key: movesKey(world.user, lay.id),
      now: world.now,
      newId: world.newId,
      later: world.later,
      saved: (saved) => this.checking.ask(saved, this.saving.base.document),
      cannotKeep: (why) =>
        this.say(
          `This browser can’t keep unsaved moves (${why}). They are kept on the server once saved.`,
          true
        )
    });
    this.checking = new LayChecking(world, this.book, () => this.document);
    if (verdict && verdictVersion === version) this.checking.known(version, document, verdict, null);
    else if (facts.state === 'open') this.checking.ask(version, document);
  }

  /** Tells the person, in the live region as well. */
  say(words: string, refused = false): void {
    this.said = { words, refused, count: this.said.count + 1 };
  }

  /** Does an edit: one step of the history, saved soon. Edits of one `gesture` are one step. False when refused. */
  do(edit: Edit, gesture: string | null = null): boolean {
    if (this.readOnly) {
      this.say('This lay is released: reopen it to change it.', true);
      return false;
    }
    if (edit.refused !== undefined) {
      this.say(edit.refused, true);
      return false;
    }
    this.#history = record(this.#history, edit, gesture);
    this.#edited();
    this.say(edit.said);
    return true;
  }

  undo(): void {
    this.#travel(undo(this.#history));
  }

  redo(): void {
    this.#travel(redo(this.#history));
  }

  #travel({ history, said }: { history: History; said: string }): void {
    if (this.readOnly || history === this.#history) {
      this.say(said, true);
      return;
    }
    this.#history = history;
    this.#edited();
    this.say(said);
  }

  /** The next edit is a gesture of its own. */
  endGesture(): void {
    this.#history = endGesture(this.#history);
  }

  #edited(): void {
    const { document } = this;
    const there = indexById(document.placements);
    if (this.picked.some((id) => !there.has(id))) this.picked = this.picked.filter((id) => there.has(id));
    this.saving.edited(document);
    this.checking.edited(document);
  }

  /** Opens the saved moves of a former visit, if there are any. */
  async recover(): Promise<void> {
    const document = await this.saving.recover();
    if (!document) return;
    this.#history = record(this.#history, { document, said: 'moves of your last visit' });
    this.checking.edited(document);
    this.say('Moves of your last visit that were not saved yet are back on the table.');
  }

  // Picking

  isPicked(id: string): boolean {
    return this.picked.includes(id);
  }

  /** Picks one piece, or adds it to (or takes it from) what is picked. */
  pick(id: string | null, adds: boolean): void {
    if (id === null) this.picked = [];
    else if (!adds) this.picked = [id];
    else if (this.isPicked(id)) this.picked = this.picked.filter((other) => other !== id);
    else this.picked = [...this.picked, id];
  }

  /** Picks many, beside what is picked or instead of it. */
  pickAll(ids: readonly string[], adds: boolean): void {
    this.picked = adds ? [...this.picked, ...ids.filter((id) => !this.isPicked(id))] : [...ids];
    this.say(
      ids.length === 0 ? 'No piece picked.' : `${ids.length} ${ids.length === 1 ? 'piece' : 'pieces'} picked.`
    );
  }

  /** What a placed piece is and where it lies, in words. */
  wordsFor(piece: TablePiece): string {
    const { fromStart, fromSelvedge, turn } = exactOf(piece.panel, piece.placement);
    const measure = (mm: number): string => formatLength(mm, this.world.unit, { decimals: 1 });
    return (
      `${nameOf(this.document, this.book, piece.placement)}: ${measure(fromStart)} from the zero end, ` +
      `${measure(fromSelvedge)} from the near selvedge, turned ${formatAngle(turn)}` +
      (piece.placement.locked ? ', locked' : '')
    );
  }

  // Hands

  /** The live check of `document`; what did not change since the last time is taken over. */
  #liveOf(document: LayDocument): Live {
    this.#live = this.#live ? this.#live.update(document, this.book) : createLive(document, this.book);
    return this.#live;
  }

  /** Takes the picked, unlocked pieces in hand. */
  lift(): boolean {
    if (this.readOnly || this.inHand) return false;
    const pieces = this.pickedPieces.filter(({ placement }) => !placement.locked);
    if (pieces.length === 0) return false;
    this.carried = { x: 0, y: 0 };
    this.inHand = new Handful(pieces, null, this.#liveOf(this.document), this.document);
    return true;
  }

  /** Takes a piece off the Rail, its middle at `at`. */
  liftFromRail(piece: LoosePiece, at: Point): boolean {
    if (this.readOnly || this.inHand) return false;
    const id = this.world.newId();
    const edit = commands.placeFromRail(this.document, this.book, piece, at, id);
    if (edit.refused !== undefined) {
      this.say(edit.refused, true);
      return false;
    }
    const lifted = tablePieces(edit.document, this.book).filter((each) => each.id === id);
    this.picked = [];
    this.carried = { x: 0, y: 0 };
    this.inHand = new Handful(lifted, piece, this.#liveOf(edit.document), edit.document);
    return true;
  }

  /** Carries what is in hand to `step` from where it was taken. */
  carry(step: Point): void {
    const hand = this.inHand;
    if (!hand) return;
    const to = this.#landing(hand, step);
    if (to.x === this.carried.x && to.y === this.carried.y) return;
    this.carried = to;
    // A check that rested is asked again once the hand is still.
    this.#cancelCatchUp?.();
    this.#cancelCatchUp = this.world.later(() => {
      if (this.inHand === hand && hand.behind(this.carried)) this.carried = { ...this.carried };
    }, 80);
  }

  /** The step that a held piece makes: a single one is drawn to the fold and to its matching places. */
  #landing(hand: Handful, step: Point): Point {
    const [piece, more] = hand.pieces;
    if (!piece || more) return { x: snap(step.x), y: snap(step.y) };
    const { document } = hand;
    const landed = landing(document, this.book, stepped(piece.placement, step), hand.moving);
    return { x: snap(landed.x - piece.placement.x), y: snap(landed.y - piece.placement.y) };
  }

  /** Lays down what is in hand: on the cloth, or back on the Rail. */
  putDown(where: 'cloth' | 'rail'): void {
    const hand = this.inHand;
    if (!hand) return;
    const { x, y } = this.carried;
    this.inHand = null;
    if (hand.fromRail) {
      if (where === 'rail') return;
      const [piece] = hand.pieces;
      // Of the whole piece, whether or not it lies on the fold.
      const middle = middleOf([boxOf(piece!.panel, piece!.placement)]);
      if (
        this.do(
          commands.placeFromRail(
            this.document,
            this.book,
            hand.fromRail,
            { x: middle.x + x, y: middle.y + y },
            piece!.id
          )
        )
      )
        this.picked = [piece!.id];
    } else if (where === 'rail') this.do(commands.toRail(this.document, this.book, hand.ids));
    else if (x !== 0 || y !== 0) this.do(commands.move(this.document, this.book, hand.ids, x, y));
    this.carried = { x: 0, y: 0 };
  }

  /** Puts what is in hand back where it was. */
  letGo(): void {
    if (!this.inHand) return;
    this.inHand = null;
    this.carried = { x: 0, y: 0 };
    this.say('Let go: nothing moved.');
  }

  /** Lays a piece from the Rail on the first free place of the cloth. */
  placeFirstFree(piece: LoosePiece): void {
    const id = this.world.newId();
    const edit = commands.placeFromRail(this.document, this.book, piece, { x: 0, y: 0 }, id);
    if (edit.refused !== undefined) return this.say(edit.refused, true);
    const laid = firstFreePlace(edit.document, this.book, id);
    const where = laid.free ? '' : ' No free place was found: it lies past the others.';
    if (!this.do({ document: laid.document, said: edit.said + where })) return;
    this.picked = [id];
    const piecePlaced = this.pickedPieces[0];
    if (piecePlaced) this.say(`${this.wordsFor(piecePlaced)}.${where}`);
  }

  /** Lays every piece of the Rail on its first free place, the largest first: one step of the history. */
  placeAll(): void {
    const area = (piece: LoosePiece): number => {
      const garment = this.document.garments.find(({ id }) => id === piece.garment);
      const panel = panelOf(this.book, garment, piece.panel);
      return panel ? pieceArea(panel.shape) : 0;
    };
    let { document } = this;
    const ids: string[] = [];
    for (const piece of this.loose.toSorted((a, b) => area(b) - area(a))) {
      const id = this.world.newId();
      const edit = commands.placeFromRail(document, this.book, piece, { x: 0, y: 0 }, id);
      if (edit.refused !== undefined) continue;
      document = firstFreePlace(edit.document, this.book, id).document;
      ids.push(id);
    }
    const count = `${ids.length} ${ids.length === 1 ? 'piece' : 'pieces'}`;
    if (ids.length === 0) this.say('No piece of the Rail could be placed.', true);
    else if (this.do({ document, said: `${count} placed on the cloth.` })) this.picked = ids;
  }

  // The server's side

  /** Saves what is unsaved; gives the version on the server, or null when it could not be saved. */
  async saveNow(): Promise<number | null> {
    await this.saving.flush();
    return this.saving.unsaved ? null : this.saving.base.version;
  }

  /** Runs a request that needs everything saved; says what went wrong. */
  async #onServer<T>(work: (version: number) => Promise<T>): Promise<T | null> {
    const version = await this.saveNow();
    if (version === null) {
      this.say('Not everything is saved yet. Try again once it is.', true);
      return null;
    }
    try {
      return await work(version);
    } catch (failure) {
      if (failure instanceof Refusal && failure.extra.verdict)
        this.checking.known(version, this.document, failure.extra.verdict as Verdict, this.world.now());
      this.say(failure instanceof Error ? failure.message : String(failure), true);
      return null;
    }
  }

  async release(name: string): Promise<boolean> {
    const answer = await this.#onServer((version) => this.world.server.release(version, name));
    if (!answer) return false;
    this.picked = [];
    this.facts = { ...this.facts, state: 'released', revision: answer.revision };
    this.say(`Released as revision ${answer.revision.number}. The lay can’t be changed now.`);
    return true;
  }

  async reopen(): Promise<boolean> {
    try {
      const { version } = await this.world.server.reopen();
      this.facts = { ...this.facts, state: 'open' };
      this.saving.goOnFrom(version, this.document, this.world.now());
      this.checking.ask(version, this.document);
      this.say('Reopened: the lay can be changed again.');
      return true;
    } catch (failure) {
      this.say(failure instanceof Error ? failure.message : String(failure), true);
      return false;
    }
  }

  async keepRevision(name: string): Promise<KeptRevision | null> {
    const kept = await this.#onServer((version) => this.world.server.keep(version, name));
    if (kept) this.say(`Kept as revision ${kept.number}, ${name}.`);
    return kept;
  }

  async restore(number: number): Promise<boolean> {
    const answer = await this.#onServer((version) =>
      this.world.server.restore(number, version, this.world.newId())
    );
    if (!answer) return false;
    this.saving.goOnFrom(answer.version, answer.document, this.world.now());
    this.#history = record(this.#history, { document: answer.document, said: `revision ${number} restored` });
    this.picked = [];
    this.checking.ask(answer.version, answer.document);
    this.say(`Revision ${number} is on the table again.`);
    return true;
  }

  async duplicate(name: string): Promise<string | null> {
    const answer = await this.#onServer(() => this.world.server.duplicate(name));
    return answer?.id ?? null;
  }

  async markChosen(): Promise<void> {
    const answer = await this.#onServer(async () => {
      await this.world.server.choose();
      return true;
    });
    if (!answer) return;
    this.facts = { ...this.facts, chosen: true };
    this.say('This lay is marked as the one to cut.');
  }

  /** The person decided what stands after another one saved in the meantime. */
  resolveConflict(document: LayDocument): void {
    this.#history = record(this.#history, {
      document,
      said: 'put together with what was saved in the meantime'
    });
    this.saving.resolve(document);
    this.#edited();
    this.say('Both people’s moves are on the table as you chose.');
  }

  /** The table is closed. */
  close(): void {
    void this.saving.flush(true);
    this.saving.stop();
    this.checking.stop();
  }
}

function indexById<T extends { readonly id: string }>(things: readonly T[]): ReadonlyMap<string, T> {
  return new Map(things.map((thing) => [thing.id, thing]));
}
