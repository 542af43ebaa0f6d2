/** The part of jsdom that the tests use; it ships no types of its own. */
declare module 'jsdom' {
  export class JSDOM {
    constructor(text: string, options?: { contentType?: string });
    readonly window: Window & typeof globalThis;
  }
}
