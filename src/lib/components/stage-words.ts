import type { ComponentProps } from 'svelte';
import type Tag from './Tag.svelte';

type Look = ComponentProps<typeof Tag>;

/** How each stage of an order is written, in the order in which an order walks them. */
export const stageWords: Readonly<Record<string, Look>> = {
  enquiry: { word: 'Enquiry', tone: 'plain', mark: '○' },
  quoted: { word: 'Quoted', tone: 'plain', mark: '◔' },
  agreed: { word: 'Agreed', tone: 'woad', mark: '◑' },
  cutting: { word: 'Cutting', tone: 'weld', mark: '✂' },
  sewing: { word: 'Sewing', tone: 'lichen', mark: '◕' },
  fitting: { word: 'Fitting', tone: 'lichen', mark: '◕' },
  handedOver: { word: 'Handed over', tone: 'fern', mark: '●' },
  closed: { word: 'Closed', tone: 'fern', mark: '✓' },
  cancelled: { word: 'Cancelled', tone: 'madder', mark: '✕' }
};

/** How each state of a lay is written. */
export const layStateWords: Readonly<Record<string, Look>> = {
  open: { word: 'Open', tone: 'plain', mark: '○' },
  released: { word: 'Released', tone: 'fern', mark: '✓' },
  cut: { word: 'Cut', tone: 'walnut', mark: '✂' },
  stop: { word: 'STOP: panels replaced', tone: 'madder', mark: '✕' }
};
