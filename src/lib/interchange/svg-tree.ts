import { SaxesParser } from 'saxes';
import { LIMITS, ReadingRefused } from './limits';

/** An element of the document. Names without their prefix; `ours` is false for elements of foreign namespaces. */
export interface SvgElement {
  name: string;
  ours: boolean;
  attributes: Map<string, string>;
  children: SvgElement[];
  /** Its own text and that of its children, in order. */
  text: string;
  /** Line of the file, for messages. */
  line: number;
}

const SVG_NAMESPACE = 'http://www.w3.org/2000/svg';

/**
 * The document as a tree. No document type with declarations of its own is accepted, so that nothing can be
 * expanded or fetched; too many or too deep elements are refused while they are read.
 */
export function parseSvgTree(text: string): SvgElement {
  const parser = new SaxesParser({ xmlns: true, position: true });
  let root: SvgElement | null = null;
  const open: SvgElement[] = [];
  let elements = 0;

  parser.on('error', (error) => {
    const entity = /entity/i.test(error.message);
    throw new ReadingRefused(
      entity ? 'entity' : 'not-xml',
      entity
        ? `The file uses a named entity that is not one of XML's own (line ${parser.line}). Save it again without entities.`
        : `The file is not well-formed: ${error.message.replace(/^\d+:\d+: /, '')} (line ${parser.line}, column ${parser.column}).`
    );
  });
  parser.on('doctype', (doctype) => {
    if (/<!|\[/.test(doctype))
      throw new ReadingRefused(
        'entity-declarations',
        'The file declares entities or a document type of its own. Save it as a plain SVG and upload it again.'
      );
  });
  parser.on('opentag', (tag) => {
    elements += 1;
    if (elements > LIMITS.elements)
      throw new ReadingRefused(
        'too-many-elements',
        `The file has more than ${LIMITS.elements.toLocaleString('en')} elements. Keep only the panels and upload it again.`
      );
    if (open.length >= LIMITS.depth)
      throw new ReadingRefused(
        'too-deep',
        `Groups are nested more than ${LIMITS.depth} deep (line ${parser.line}). Ungroup the drawing and upload it again.`
      );
    const attributes = new Map<string, string>();
    for (const attribute of Object.values(tag.attributes)) {
      if (typeof attribute === 'string') continue;
      // A prefixed attribute never replaces the plain one of the same name.
      if (attribute.prefix === '' || !attributes.has(attribute.local))
        attributes.set(attribute.local, attribute.value);
      if (attribute.prefix !== '' && attribute.local === 'label') attributes.set('*label', attribute.value);
    }
    const element: SvgElement = {
      name: tag.local,
      ours: tag.uri === SVG_NAMESPACE || tag.uri === '',
      attributes,
      children: [],
      text: '',
      line: parser.line
    };
    const parent = open[open.length - 1];
    if (parent) parent.children.push(element);
    else root = element;
    open.push(element);
  });
  const append = (piece: string): void => {
    for (const element of open)
      if (
        element.text.length < 2000 &&
        (element.name === 'text' || element.name === 'title' || element.name === 'style')
      )
        element.text += piece;
  };
  parser.on('text', append);
  parser.on('cdata', append);
  parser.on('closetag', () => void open.pop());

  parser.write(text).close();
  if (!root) throw new ReadingRefused('empty', 'The file is empty: it holds no drawing.');
  const found: SvgElement = root;
  if (found.name !== 'svg' || !found.ours)
    throw new ReadingRefused(
      'not-svg',
      `The file is XML but not an SVG drawing: its outermost element is <${found.name.slice(0, 60)}>.`
    );
  return found;
}
