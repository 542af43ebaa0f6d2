/** The words of the trade as Warpwise uses them, and its own few. */
export const tradeWords: readonly (readonly [string, string])[] = [
  [
    'warp, weft',
    'The threads of a cloth: the warp runs along its length, the weft across from selvedge to selvedge.'
  ],
  ['grain line', 'The line of a panel that must lie along the warp.'],
  ['bias', 'The direction at 45° to the warp.'],
  ['selvedge', 'The woven edge of the cloth. It is not cut from.'],
  ['usable width', 'The width between the selvedges that may be cut from.'],
  [
    'nap',
    'A pile or a shine that looks different the other way up. On napped cloth every piece lies the same way.'
  ],
  ['right side, wrong side', 'The side that is seen on the garment, and the other one.'],
  ['spread', 'How the cloth lies on the table: open in a single ply, folded, or several plies.'],
  ['ply', 'One layer of cloth.'],
  ['panel', 'One outline of a style, drawn once.'],
  ['piece', 'One physical copy of a panel to be cut for one garment.'],
  ['pair', 'A panel cut twice, mirrored: a left and a right piece.'],
  ['hand', 'Whether a piece belongs to the left or the right of the body.'],
  [
    'sew line, cut line',
    'Where the needle goes, and where the knife goes: the seam allowance lies between them.'
  ],
  ['seam allowance', 'The cloth outside the sew line.'],
  ['notch', 'A short mark on an edge that meets another on the edge it is sewn to.'],
  ['drill hole', 'A mark inside a piece: the point of a dart, a button.'],
  ['fold', 'The edge of a half-drawn panel along which it is mirrored. It is not cut.'],
  [
    'block, dart, ease',
    'A plain pattern that styles begin from; cloth taken away into a point; cloth left for movement.'
  ],
  ['repeat', 'The distance after which a stripe, check or print begins again.'],
  ['lay', 'How the pieces lie on the cloth; also the drawing of it.'],
  ['efficiency', 'The area of the pieces as a share of the cloth of the lay.'],
  ['utilisation', 'The same as a share of all cloth consumed, ends and selvedges included.'],
  ['end allowance', 'Cloth at each end of the lay that is not cut from.'],
  ['offcut, remnant', 'What is left after cutting; what is left at the end of a roll.'],
  ['bundle, ticket', 'The pieces of one garment tied together; the paper that goes with them.'],
  ['toile, fitting', 'A trial garment of cheap cloth; trying it on.'],
  ['interlining', 'A cloth between main cloth and lining that gives body.']
];

export const ownWords: readonly (readonly [string, string])[] = [
  ['Lay table', 'The screen on which pieces are placed on the cloth.'],
  ['Rail', 'Where the pieces that are not yet on the cloth hang, grouped by garment.'],
  ['Slip', 'The card beside the cloth: readings, findings, cost.'],
  ['reading', 'A number that is computed of a lay: length used, efficiency, least length, cloth to buy.'],
  ['finding', 'One thing that the check found, with its place and its measure.'],
  ['snug', 'To push the chosen pieces one way until they touch, at the clearance.'],
  [
    'settle',
    'To let the server place the pieces. Each such search is a settle run; its result is taken or left, never written over your work.'
  ],
  ['least length', 'The length below which no lay of these pieces can exist.'],
  ['need, yield', 'A piece that an order still asks for; the pieces that a placement gives.'],
  ['revision', 'A lay as it was kept at one moment, with a number that the printed guide carries.'],
  ['release', 'To say that a lay may be cut. It is read-only from then on.'],
  ['cutting guide', 'The printed result: sheets at true size, an overview, the ticket.']
];
