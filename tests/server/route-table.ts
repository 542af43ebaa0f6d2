import { newId } from '$lib/server/ids';
import type { Permission } from '$lib/server/permissions';
import { password, type Call } from './cast';
import type { Props } from './props';

/*
 * Every handler of every route, and who may use it: what permission-matrix.test.ts goes through. A route that is not
 * here fails the suite. Keys are the path and, after a blank, the method of an API route, 'load' or '?/action' of a page.
 */

export interface Entry {
  /** A permission of the table; 'anyone' also signed out; 'person': signed in, in a studio or not. */
  readonly access: Permission | 'anyone' | 'person';
  /** How the handler is called about the things of `own`: its studio's people must be answered. */
  readonly call?: (own: Props) => Call;
  /**
   * Calls that name, beside things of `own`, one of another studio, in a body or a query. Each is answered 404, or 400
   * at a field, and changes nothing. Foreign ids in paths are tried by the matrix itself.
   */
  readonly foreign?: (own: Props, other: Props) => Readonly<Record<string, Call>>;
  /** What `call` is answered where it is not 200 or 303: a form that the table does not fill in whole. */
  readonly answers?: readonly number[];
  /** The path's own ids are secrets of their own kind (one-time links, printed codes): 404 is not asked of them. */
  readonly byCode?: true;
}

const params = (values: Record<string, string>, rest: Call = {}): Call => ({ params: values, ...rest });
const clothForm = {
  name: 'Linen',
  fibre: 'linen',
  fullWidth: '150 cm',
  usableWidth: '145 cm',
  sides: 'different',
  nap: 'none',
  colour: '#2F5D7C'
};
const lineForm = (own: Props, changes: Record<string, string> = {}) => ({
  version: '1',
  style: own.styleVersion,
  label: '40',
  quantity: '1',
  'cloth.main': own.cloth,
  'cloth.lining': own.lining,
  ...changes
});
const lengthForm = { kind: 'roll', name: 'Roll 9', length: '4 m', usableWidth: '98 cm' };
const onLength = (own: Props, form?: Record<string, string>): Call =>
  params({ id: own.clothLength }, form ? { form } : {});
const onOrderCloth = (own: Props, form?: Record<string, string>): Call =>
  params({ id: own.order, cloth: own.cloth }, form ? { form } : {});
function twoOrders(first: string, second: string): FormData {
  const form = new FormData();
  form.append('order', first);
  form.append('order', second);
  return form;
}
const token = 'x'.repeat(43);
const onOrder = (own: Props, form?: Record<string, string>): Call =>
  params({ id: own.order }, form ? { form } : {});
const onQuote = (own: Props, form?: Record<string, string>): Call =>
  params({ id: own.order, number: '1' }, form ? { form } : {});
const shares = { overhead: '10', margin: '10', taxRate: '0', depositShare: '50' };
const byHand = (): Record<string, string> => ({
  id: newId(),
  kind: 'balance',
  method: 'cash',
  amount: '10',
  day: '2026-05-31',
  receiptTo: ''
});
const back = (payment: string): Record<string, string> => ({
  id: newId(),
  of: payment,
  amount: '1',
  method: 'cash',
  day: '2026-05-31'
});
const onLay = (own: Props, json?: unknown): Call =>
  params({ id: own.lay }, json === undefined ? {} : { json });
const save = (own: Props, document: unknown = own.layDocument): Call => ({
  params: { id: own.lay },
  method: 'PUT',
  json: { version: own.layVersion, saveId: newId(), document }
});

export const routeTable: Readonly<Record<string, Entry>> = {
  // The door.
  '/ load': { access: 'anyone' },
  '/(door) layout': { access: 'anyone' },
  '/health GET': { access: 'anyone' },
  '/sign-in load': { access: 'anyone' },
  '/sign-in ?/default': {
    access: 'anyone',
    call: () => ({ form: { email: 'who@far.example', password: 'x' } })
  },
  '/sign-in/code load': { access: 'anyone' },
  '/sign-in/code ?/default': { access: 'anyone', call: () => ({ form: { code: '123456' } }) },
  '/sign-out POST': { access: 'anyone' },
  '/sign-up load': { access: 'anyone' },
  '/sign-up ?/default': {
    access: 'anyone',
    call: () => ({ form: { studioName: 'New', name: 'Who', email: 'who@far.example' } })
  },
  '/sign-up/[token] load': { access: 'anyone', byCode: true, call: () => params({ token }) },
  '/sign-up/[token] ?/default': {
    access: 'anyone',
    byCode: true,
    call: () => params({ token }, { form: { password: 'nine copper thimbles sing' } })
  },
  '/forgotten ?/default': { access: 'anyone', call: () => ({ form: { email: 'who@far.example' } }) },
  '/reset/[token] load': { access: 'anyone', byCode: true, call: () => params({ token }) },
  '/reset/[token] ?/default': {
    access: 'anyone',
    byCode: true,
    call: () => params({ token }, { form: { password: 'nine copper thimbles sing' } })
  },
  '/invitation/[token] load': { access: 'anyone', byCode: true, call: () => params({ token }) },
  '/invitation/[token] ?/accept': {
    access: 'person',
    byCode: true,
    call: () => params({ token }, { form: {} })
  },
  '/invitation/[token] ?/join': {
    access: 'anyone',
    byCode: true,
    call: () => params({ token }, { form: { name: 'Who', password: 'nine copper thimbles sing' } })
  },
  '/new-address/[token] load': { access: 'person', byCode: true, call: () => params({ token }) },
  '/new-address/[token] ?/default': {
    access: 'person',
    byCode: true,
    call: () => params({ token }, { form: {} })
  },
  '/r/[hash] load': { access: 'anyone', byCode: true, call: (own) => params({ hash: own.hash }) },

  // A person's own.
  '/(app) layout': { access: 'person' },
  '/profile load': { access: 'person' },
  '/profile ?/rename': { access: 'person', call: () => ({ form: { name: 'Odile' } }) },
  '/profile ?/changeAddress': {
    access: 'person',
    call: () => ({ form: { email: 'new@far.example', addressPassword: password } })
  },
  '/profile ?/changePassword': {
    access: 'person',
    call: () => ({ form: { password, newPassword: 'nine copper thimbles sing' } })
  },
  '/profile ?/endSession': {
    access: 'person',
    // The session is the owner's: for the others of the studio there is none.
    answers: [303, 404],
    call: (own) => ({ form: { publicId: own.session } }),
    foreign: (_own, other) => ({ session: { form: { publicId: other.session } } })
  },
  '/profile ?/endOthers': { access: 'person' },
  '/profile ?/endAll': { access: 'person' },
  '/profile/second-factor load': { access: 'person' },
  '/profile/second-factor ?/turnOn': {
    access: 'person',
    answers: [400],
    call: () => ({ form: { password, code: '123456' } })
  },
  '/profile/second-factor ?/renewCodes': {
    access: 'person',
    answers: [400],
    call: () => ({ form: { password, code: '123456' } })
  },
  '/profile/second-factor ?/turnOff': {
    access: 'person',
    answers: [400],
    call: () => ({ form: { password, code: '123456' } })
  },
  '/studios load': { access: 'person' },
  '/studios ?/enter': {
    access: 'person',
    call: (own) => ({ form: { id: own.studio } }),
    foreign: (_own, other) => ({ studio: { form: { id: other.studio } } })
  },
  '/studios ?/open': { access: 'person', call: () => ({ form: { name: 'Second bench' } }) },

  // Owners.
  '/people load': { access: 'people: manage' },
  '/people ?/invite': {
    access: 'people: manage',
    call: () => ({ form: { email: 'somebody@far.example', role: 'cutter' } })
  },
  '/people ?/requireSecondFactor': {
    access: 'people: manage',
    call: () => ({ form: { required: 'no' } })
  },
  '/people ?/takeBack': {
    access: 'people: manage',
    call: (own) => ({ form: { id: own.invitation } }),
    foreign: (_own, other) => ({ invitation: { form: { id: other.invitation } } })
  },
  '/people ?/changeRole': {
    access: 'people: manage',
    call: (own) => ({ form: { userId: own.cutter, role: 'patternMaker' } }),
    foreign: (_own, other) => ({ person: { form: { userId: other.cutter, role: 'owner' } } })
  },
  '/people ?/disable': {
    access: 'people: manage',
    call: (own) => ({ form: { userId: own.cutter } }),
    foreign: (_own, other) => ({ person: { form: { userId: other.cutter } } })
  },
  '/people ?/enable': {
    access: 'people: manage',
    call: (own) => ({ form: { userId: own.cutter } }),
    foreign: (_own, other) => ({ person: { form: { userId: other.cutter } } })
  },
  '/people/record load': { access: 'audit: see' },
  '/settings load': { access: 'studio: manage' },
  '/settings ?/default': {
    access: 'studio: manage',
    call: () => ({ form: { name: 'Row', currency: 'EUR', lengthUnit: 'cm', timeZone: 'UTC' } })
  },
  '/settings/prices load': { access: 'studio: manage' },
  '/settings/prices ?/default': {
    access: 'studio: manage',
    call: () => ({
      form: { ...shares, taxMode: 'none', hourly: '40', roundTo: '1', validDays: '14', fittings: '2' }
    })
  },

  '/api/revisions/[id]/files/[kind] GET': {
    access: 'guides: print',
    call: (own) => params({ id: own.revision, kind: 'csv' })
  },

  // The cutting room.
  '/cutting load': { access: 'lays: cut' },
  '/cutting/[lay] load': { access: 'lays: cut', call: (own) => params({ lay: own.releasedLay }) },
  '/cutting/[lay] ?/measureIn': {
    access: 'lays: cut',
    answers: [200],
    call: (own) => params({ lay: own.releasedLay }, { form: { width: '80 cm' } })
  },
  '/cutting/[lay] ?/record': {
    access: 'lays: cut',
    // The table never closes the lay: other routes need it released.
    answers: [400],
    call: (own) => params({ lay: own.releasedLay }, { form: { lengthUsed: 'long' } })
  },
  '/api/cutting/[lay]/ticks POST': {
    access: 'lays: cut',
    call: (own) => params({ lay: own.releasedLay }, { json: { ticks: [{ placement: 'p1', cut: true }] } }),
    foreign: (own) => ({
      placement: params(
        { lay: own.releasedLay },
        { json: { ticks: [{ placement: 'of another lay', cut: true }] } }
      )
    })
  },

  // Clients, measurements, drafts.
  '/clients load': { access: 'clients: see contact' },
  '/clients/new load': { access: 'clients: see contact' },
  '/clients/new ?/default': { access: 'clients: see contact', call: () => ({ form: { name: 'Marit' } }) },
  '/clients/[id] load': { access: 'clients: see contact', call: (own) => params({ id: own.client }) },
  '/clients/[id] ?/save': {
    access: 'clients: see contact',
    answers: [303, 409],
    call: (own) => params({ id: own.client }, { form: { name: 'Wendela', version: '1' } })
  },
  '/clients/[id] ?/erase': {
    access: 'clients: see contact',
    answers: [400],
    call: (own) => params({ id: own.client }, { form: { confirm: 'no' } })
  },
  '/clients/[id]/measurements/new load': {
    access: 'measurements: see',
    call: (own) => params({ id: own.client })
  },
  '/clients/[id]/measurements/new ?/default': {
    access: 'measurements: see',
    call: (own) =>
      params({ id: own.client }, { form: { takenOn: '2026-06-01', takenBy: 'Piet', waist: '72 cm' } })
  },
  '/clients/[id]/measurements/[set] load': {
    access: 'measurements: see',
    call: (own) => params({ id: own.client, set: own.measurementSet }),
    foreign: (own, other) => ({
      set: { params: { id: own.client, set: own.measurementSet }, path: `/x?against=${other.measurementSet}` }
    })
  },
  '/size-tables load': { access: 'measurements: see' },
  '/size-tables ?/bringIn': {
    access: 'measurements: see',
    answers: [400],
    call: () => ({ form: { name: 'Ours' } })
  },
  '/size-tables ?/remove': {
    access: 'measurements: see',
    // Two roles remove it: the second finds it gone.
    answers: [303, 404],
    call: (own) => ({ form: { id: own.sizeChart } }),
    foreign: (_own, other) => ({ table: { form: { id: other.sizeChart } } })
  },
  '/size-tables/[id] GET': { access: 'measurements: see', call: (own) => params({ id: own.sizeChart }) },
  '/drafts load': { access: 'measurements: see' },
  '/drafts/[draft] load': {
    access: 'measurements: see',
    byCode: true,
    call: (own) => ({ params: { draft: 'circle-skirt' }, path: `/x?set=${own.measurementSet}` }),
    foreign: (_own, other) => ({
      set: { params: { draft: 'circle-skirt' }, path: `/x?set=${other.measurementSet}` },
      client: { params: { draft: 'circle-skirt' }, path: `/x?client=${other.client}` }
    })
  },
  '/drafts/[draft] ?/preview': {
    access: 'measurements: see',
    byCode: true,
    call: (own) => params({ draft: 'circle-skirt' }, { form: { source: `set:${own.measurementSet}` } }),
    foreign: (_own, other) => ({
      set: params({ draft: 'circle-skirt' }, { form: { source: `set:${other.measurementSet}` } }),
      size: params({ draft: 'circle-skirt' }, { form: { source: `size:${other.sizeChart}:S` } })
    })
  },
  '/drafts/[draft] ?/draw': {
    access: 'measurements: see',
    byCode: true,
    answers: [303],
    call: (own) => params({ draft: 'circle-skirt' }, { form: { source: `set:${own.measurementSet}` } }),
    foreign: (_own, other) => ({
      set: params({ draft: 'circle-skirt' }, { form: { source: `set:${other.measurementSet}` } }),
      size: params({ draft: 'circle-skirt' }, { form: { source: `size:${other.sizeChart}:S` } })
    })
  },
  '/drafts/runs/[id] load': { access: 'measurements: see', call: (own) => params({ id: own.draftRun }) },
  '/api/drafts/runs/[id]/sheet GET': {
    access: 'measurements: see',
    call: (own) => params({ id: own.draftRun })
  },
  '/drafts/runs/[id] ?/keep': {
    access: 'styles: change',
    answers: [303, 409],
    call: (own) => params({ id: own.draftRun }, { form: { name: 'Kept skirt' } }),
    foreign: (own, other) => ({
      style: params({ id: own.draftRun }, { form: { style: `${other.style}:1` } })
    })
  },

  // Cloths.
  '/cloths load': { access: 'cloths: see' },
  '/cloths/new load': { access: 'cloths: change' },
  '/cloths/new ?/default': { access: 'cloths: change', call: () => ({ form: clothForm }) },
  '/cloths/[id] load': { access: 'cloths: see', call: (own) => params({ id: own.cloth }) },
  '/cloths/[id] ?/save': {
    access: 'cloths: change',
    call: (own) => params({ id: own.cloth }, { form: clothForm })
  },
  '/cloths/[id] ?/archive': {
    access: 'cloths: change',
    call: (own) => params({ id: own.cloth }, { form: {} })
  },
  '/cloths/[id] ?/putBack': {
    access: 'cloths: change',
    call: (own) => params({ id: own.cloth }, { form: {} })
  },

  '/cloths/[id] ?/addWidth': {
    access: 'cloths: change',
    call: (own) =>
      params(
        { id: own.cloth },
        {
          form: {
            fullWidth: '120 cm',
            usableWidth: '116 cm',
            buyStep: '10 cm',
            price: '9',
            priceUnit: 'metre'
          }
        }
      )
  },
  '/cloths/[id] ?/removeWidth': {
    access: 'cloths: change',
    call: (own) => params({ id: own.cloth }, { form: { width: own.clothWidth } }),
    foreign: (own, other) => ({ width: params({ id: own.cloth }, { form: { width: other.clothWidth } }) })
  },

  // Rolls and remnants.
  '/cloths/[id]/lengths/new load': {
    access: 'cloth lengths: change',
    call: (own) => params({ id: own.cloth })
  },
  '/cloths/[id]/lengths/new ?/default': {
    access: 'cloth lengths: change',
    call: (own) => params({ id: own.cloth }, { form: lengthForm })
  },
  '/cloths/lengths/[id] load': { access: 'cloths: see', call: (own) => onLength(own) },
  '/cloths/lengths/[id] ?/save': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { ...lengthForm, version: own.clothLengthVersion })
  },
  '/cloths/lengths/[id] ?/photo': {
    access: 'cloth lengths: change',
    answers: [400],
    call: (own) => onLength(own, {})
  },
  '/cloths/lengths/[id] ?/addFlaw': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { fromEnd: '30 cm', fromSelvedge: '20 cm', along: '2 cm', across: '1 cm' })
  },
  '/cloths/lengths/[id] ?/removeFlaw': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { flaw: own.clothFlaw }),
    foreign: (own, other) => ({ flaw: onLength(own, { flaw: other.clothFlaw }) })
  },
  '/cloths/lengths/[id] ?/reserve': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { version: own.clothLengthVersion, order: own.order }),
    foreign: (own, other) => ({
      order: onLength(own, { version: own.clothLengthVersion, order: other.order })
    })
  },
  '/cloths/lengths/[id] ?/release': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { version: own.clothLengthVersion })
  },
  '/cloths/lengths/[id] ?/sign': {
    access: 'cloth lengths: change',
    call: (own) => onLength(own, { version: own.clothLengthVersion, by: 'Ada' })
  },
  '/api/cloth-lengths/[id]/photo GET': { access: 'cloths: see', call: (own) => onLength(own) },
  '/lays/[id]/cloth load': { access: 'lays: change', call: (own) => onLay(own) },
  '/lays/[id]/cloth ?/default': {
    access: 'lays: change',
    call: (own) =>
      params({ id: own.lay }, { form: { version: String(own.layVersion), length: own.clothLength } }),
    foreign: (own, other) => ({
      length: params(
        { id: own.lay },
        { form: { version: String(own.layVersion), length: other.clothLength } }
      )
    })
  },

  // Orders.
  '/orders load': { access: 'orders: see' },
  '/orders ?/fillDemo': { access: 'demo: clear' },
  '/orders ?/clearDemo': { access: 'demo: clear' },
  '/orders/new load': { access: 'orders: change' },
  '/orders/new ?/default': {
    access: 'orders: change',
    call: (own) => ({ form: { clientName: 'Edda', style: own.styleVersion, quantity: '1' } }),
    foreign: (_own, other) => ({
      style: { form: { clientName: 'Edda', style: other.styleVersion, quantity: '1' } }
    })
  },
  '/orders/[id] load': { access: 'orders: see', call: (own) => onOrder(own) },
  '/orders/[id] ?/save': {
    access: 'orders: change',
    call: (own) => onOrder(own, { version: '1', clientName: 'Edda', stage: 'enquiry' })
  },
  '/orders/[id] ?/addLine': {
    access: 'orders: change',
    call: (own) => onOrder(own, lineForm(own)),
    foreign: (own, other) => ({
      style: onOrder(own, lineForm(own, { style: other.styleVersion })),
      cloth: onOrder(own, lineForm(own, { 'cloth.main': other.cloth }))
    })
  },
  '/orders/[id] ?/saveLine': {
    access: 'orders: change',
    call: (own) => onOrder(own, lineForm(own, { what: own.item })),
    foreign: (own, other) => ({
      line: onOrder(own, lineForm(own, { what: other.item })),
      style: onOrder(own, lineForm(own, { what: own.item, style: other.styleVersion })),
      cloth: onOrder(own, lineForm(own, { what: own.item, 'cloth.lining': other.lining }))
    })
  },
  '/orders/[id] ?/removeLine': {
    access: 'orders: change',
    call: (own) => onOrder(own, { version: '1', what: own.item }),
    foreign: (own, other) => ({ line: onOrder(own, { version: '1', what: other.item }) })
  },
  '/orders/[id] ?/newLay': {
    access: 'lays: change',
    call: (own) => onOrder(own, { cloth: own.cloth }),
    foreign: (own, other) => ({ cloth: onOrder(own, { cloth: other.cloth }) })
  },
  '/orders/[id] ?/choose': {
    access: 'lays: change',
    call: (own) => onOrder(own, { lay: own.lay }),
    foreign: (own, other) => ({ lay: onOrder(own, { lay: other.lay }) })
  },
  '/api/orders/[id]/lays POST': {
    access: 'lays: change',
    call: (own) => params({ id: own.order }, { json: { clothId: own.cloth } }),
    foreign: (own, other) => ({ cloth: params({ id: own.order }, { json: { clothId: other.cloth } }) })
  },

  // Price, quotes, money.
  '/orders/[id]/price load': { access: 'prices: see', call: (own) => onOrder(own) },
  '/orders/[id]/price ?/save': {
    access: 'prices: change',
    call: (own) => onOrder(own, { version: '1', rate: '40' })
  },
  '/orders/[id]/price ?/quote': {
    access: 'prices: change',
    call: (own) => onOrder(own, { validUntil: '2099-01-01', fittings: '2' })
  },
  '/orders/[id]/quotes/[number] load': { access: 'prices: see', call: (own) => onQuote(own) },
  '/orders/[id]/quotes/[number] ?/send': {
    access: 'prices: change',
    call: (own) => onQuote(own, { to: 'client@far.example' })
  },
  '/orders/[id]/quotes/[number] ?/withdraw': { access: 'prices: change', call: (own) => onQuote(own, {}) },
  '/api/orders/[id]/quotes/[number]/pdf GET': { access: 'prices: see', call: (own) => onQuote(own) },
  '/orders/[id]/payments load': { access: 'prices: see', call: (own) => onOrder(own) },
  '/orders/[id]/payments ?/waive': {
    access: 'payments: manage',
    call: (own) => onOrder(own, { waiverNote: 'An old client' })
  },
  '/orders/[id]/payments ?/record': {
    access: 'payments: manage',
    call: (own) => onOrder(own, byHand())
  },
  '/orders/[id]/payments ?/refund': {
    access: 'payments: manage',
    call: (own) => onOrder(own, back(own.payment)),
    foreign: (own, other) => ({ payment: onOrder(own, back(other.payment)) })
  },
  '/orders/[id]/payments ?/sendLink': {
    access: 'prices: change',
    call: (own) => onOrder(own, { to: 'client@far.example' })
  },
  '/orders/[id]/payments ?/revoke': {
    access: 'prices: change',
    call: (own) => onOrder(own, { link: own.clientLink }),
    foreign: (own, other) => ({ link: onOrder(own, { link: other.clientLink }) })
  },
  '/orders/[id]/payments ?/answered': {
    access: 'prices: change',
    call: (own) => onOrder(own, { question: own.question }),
    foreign: (own, other) => ({ question: onOrder(own, { question: other.question }) })
  },
  // The client's page: its token is the key, client-page.test.ts walks it with real ones.
  '/c/[token] load': { access: 'anyone', byCode: true, call: () => params({ token }) },
  '/c/[token] ?/agree': { access: 'anyone', byCode: true, call: () => params({ token }, { form: {} }) },
  '/c/[token] ?/decline': { access: 'anyone', byCode: true, call: () => params({ token }, { form: {} }) },
  '/c/[token] ?/pay': { access: 'anyone', byCode: true, call: () => params({ token }, { form: {} }) },
  '/c/[token] ?/ask': { access: 'anyone', byCode: true, call: () => params({ token }, { form: {} }) },
  '/c/[token]/pdf GET': { access: 'anyone', byCode: true, call: () => params({ token }) },
  '/c/back load': { access: 'anyone' },
  // Signed by the card host, or refused: card-payments.test.ts.
  '/api/payments/webhook POST': { access: 'anyone', call: () => ({ json: {} }) },
  '/orders/[id]/cloth/[cloth] load': { access: 'lays: see', call: (own) => onOrderCloth(own) },
  '/orders/[id]/cloth/[cloth] ?/try': {
    access: 'lays: change',
    call: (own) => onOrderCloth(own, { question: 'widths', seconds: '5' })
  },
  '/orders/[id]/cloth/[cloth] ?/stop': {
    access: 'lays: change',
    call: (own) => onOrderCloth(own, { job: own.settled }),
    foreign: (own, other) => ({ job: onOrderCloth(own, { job: other.settled }) })
  },
  '/orders/[id]/cloth/[cloth] ?/take': {
    access: 'lays: change',
    // Nothing was tried on it yet.
    answers: [400],
    call: (own) => onOrderCloth(own, { length: own.clothLength }),
    foreign: (own, other) => ({ length: onOrderCloth(own, { length: other.clothLength }) })
  },
  '/cloths/[id]/joint load': { access: 'lays: change', call: (own) => params({ id: own.cloth }) },
  '/cloths/[id]/joint ?/default': {
    access: 'lays: change',
    // One order alone is no joint lay.
    answers: [400],
    call: (own) => params({ id: own.cloth }, { form: { order: own.order } }),
    foreign: (own, other) => ({
      orders: params({ id: own.cloth }, { form: twoOrders(own.order, other.order) })
    })
  },

  // Styles and uploads.
  '/styles load': { access: 'styles: see' },
  '/styles/new load': {
    access: 'styles: change',
    foreign: (_own, other) => ({ style: { path: `/styles/new?style=${other.style}` } })
  },
  '/styles/new ?/default': {
    access: 'styles: change',
    call: () => ({ form: { files: drawing() } }),
    foreign: (_own, other) => ({ style: { form: { files: drawing(), style: other.style } } })
  },
  '/styles/[id] load': { access: 'styles: see', call: (own) => params({ id: own.style }) },
  '/styles/[id] ?/words': {
    access: 'styles: change',
    call: (own) => params({ id: own.style }, { form: { name: 'Bodice', kind: '', note: '' } })
  },
  '/styles/[id] ?/version': {
    access: 'styles: change',
    answers: [400],
    call: (own) => params({ id: own.style }, { form: { basedOn: '1' } })
  },
  '/styles/[id] ?/archive': {
    access: 'styles: change',
    call: (own) => params({ id: own.style }, { form: {} })
  },
  '/styles/[id] ?/putBack': {
    access: 'styles: change',
    call: (own) => params({ id: own.style }, { form: {} })
  },
  '/styles/[id]/desk/[panel] load': {
    access: 'styles: change',
    call: (own) => params({ id: own.style, panel: own.layDocument.needs[0]!.panel })
  },
  '/api/styles/[id]/desk GET': { access: 'styles: change', call: (own) => params({ id: own.style }) },
  '/api/styles/[id]/desk PUT': {
    access: 'styles: change',
    answers: [400],
    call: (own) =>
      params({ id: own.style }, { method: 'PUT', json: { version: 0, saveId: newId(), document: {} } })
  },
  '/api/styles/[id]/desk DELETE': {
    access: 'styles: change',
    // There is no working copy: 409 says so.
    answers: [409],
    call: (own) => params({ id: own.style }, { method: 'DELETE', json: { version: 1 } })
  },
  '/api/styles/[id]/desk/version POST': {
    access: 'styles: change',
    answers: [409],
    call: (own) => params({ id: own.style }, { method: 'POST', json: { version: 1, note: '' } })
  },
  '/styles/imports/[id] load': { access: 'styles: change', call: (own) => params({ id: own.upload }) },
  '/styles/imports/[id] ?/save': {
    access: 'styles: change',
    answers: [400],
    call: (own) => params({ id: own.upload }, { form: { styleName: 'Sample' } })
  },
  '/styles/imports/[id] ?/leaveOut': {
    access: 'styles: change',
    call: (own) => params({ id: own.upload }, { form: { outline: 'o1' } })
  },
  '/styles/imports/[id] ?/remove': {
    access: 'styles: change',
    call: (own) => params({ id: own.upload }, { form: {} })
  },
  '/api/files/[id] GET': { access: 'styles: see', call: (own) => params({ id: own.file }) },

  // Lays.
  '/lays load': { access: 'lays: see' },
  '/lays/[id] load': { access: 'lays: see', call: (own) => onLay(own) },
  '/lays/[id]/compare load': { access: 'lays: see', call: (own) => onLay(own) },
  '/api/lays/[id] GET': { access: 'lays: see', call: (own) => onLay(own) },
  '/api/lays/[id] PUT': {
    access: 'lays: change',
    call: (own) => save(own),
    foreign: (own, other) => ({
      // Needs and garments are the order's; what a document says about them is not believed.
      document: save(own, other.layDocument),
      garment: save(own, {
        ...own.layDocument,
        garments: [...own.layDocument.garments, ...other.layDocument.garments],
        placements: [...own.layDocument.placements, ...other.layDocument.placements].map((placement, i) => ({
          ...placement,
          id: `p${i}`
        }))
      })
    })
  },
  '/api/lays/[id]/check POST': {
    access: 'lays: see',
    call: (own) => onLay(own, { version: own.layVersion })
  },
  '/api/lays/[id]/choose POST': { access: 'lays: change', call: (own) => onLay(own, {}) },
  '/api/lays/[id]/duplicate POST': { access: 'lays: change', call: (own) => onLay(own, { name: 'Copy' }) },
  '/api/lays/[id]/release POST': {
    access: 'lays: release',
    call: (own) => onLay(own, { version: own.layVersion, name: 'Now' })
  },
  '/api/lays/[id]/reopen POST': {
    access: 'lays: release',
    call: (own) => params({ id: own.releasedLay }, { json: {} })
  },
  '/api/lays/[id]/restore POST': {
    access: 'lays: change',
    call: (own) => onLay(own, { number: 1, version: own.layVersion, saveId: newId() })
  },
  '/api/lays/[id]/revisions GET': { access: 'lays: see', call: (own) => onLay(own) },
  '/api/lays/[id]/revisions POST': {
    access: 'lays: change',
    call: (own) => onLay(own, { version: own.layVersion, name: 'Again' })
  },
  '/api/lays/[id]/revisions/[number] GET': {
    access: 'lays: see',
    call: (own) => params({ id: own.lay, number: '1' })
  },

  // Settle runs.
  '/api/lays/[id]/settle GET': { access: 'lays: change', call: (own) => onLay(own) },
  '/api/lays/[id]/settle POST': {
    access: 'lays: change',
    call: (own) => onLay(own, { version: own.layVersion, budgetSeconds: 60, from: 'here', pieces: 'all' })
  },
  '/api/lays/[id]/settle/[job] POST': {
    access: 'lays: change',
    call: (own) => params({ id: own.lay, job: own.settled }, { json: { answer: 'left' } }),
    foreign: (own, other) => ({
      run: params({ id: own.lay, job: other.settled }, { json: { answer: 'left' } })
    })
  },
  '/api/lays/[id]/settle/[job]/lay POST': {
    access: 'lays: change',
    call: (own) => params({ id: own.lay, job: own.settled }, { json: { name: 'Settled' } }),
    foreign: (own, other) => ({
      run: params({ id: own.lay, job: other.settled }, { json: { name: 'Settled' } })
    })
  },

  // Guides and jobs.
  '/lays/[id]/guides load': { access: 'guides: print', call: (own) => onLay(own) },
  '/lays/[id]/guides ?/make': {
    access: 'guides: print',
    call: (own) => params({ id: own.lay }, { form: { revision: own.revision, kind: 'whole' } }),
    foreign: (own, other) => ({
      revision: params({ id: own.lay }, { form: { revision: other.revision, kind: 'whole' } })
    })
  },
  '/lays/[id]/guides ?/stop': {
    access: 'guides: print',
    call: (own) => params({ id: own.lay }, { form: { job: own.waitingGuide } }),
    foreign: (own, other) => ({ job: params({ id: own.lay }, { form: { job: other.waitingGuide } }) })
  },
  '/api/revisions/[id]/guides POST': {
    access: 'guides: print',
    call: (own) => params({ id: own.revision }, { json: { kind: 'whole' } })
  },
  '/api/guides/[job]/file GET': { access: 'guides: print', call: (own) => params({ job: own.guide }) },
  '/api/jobs/[id] GET': { access: 'studio: enter', call: (own) => params({ id: own.guide }) },
  '/api/jobs/[id]/events GET': { access: 'studio: enter', call: (own) => params({ id: own.guide }) },
  '/api/jobs/[id]/stop POST': {
    access: 'studio: enter',
    call: (own) => params({ id: own.waitingGuide }, { json: {} })
  }
};

/** Pages without a load of their own: the same for everybody, nothing of a studio in them. */
export const plainPages: readonly string[] = [
  '/help',
  '/help/cautions',
  '/help/keys',
  '/help/readings',
  '/help/words',
  '/look'
];

function drawing(): File {
  return new File(
    [
      '<svg xmlns="http://www.w3.org/2000/svg" width="10cm" height="10cm"><rect width="90" height="90"/></svg>'
    ],
    'square.svg'
  );
}
