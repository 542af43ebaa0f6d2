import { createHmac, randomBytes } from 'node:crypto';
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

/*
 * A card host on this machine: the few endpoints that the product asks of the hosted service, a page that "pays" without any card,
 * and messages signed by the published scheme (HMAC-SHA256 over time and body). It is written against the public description of that
 * interface, not with the SDK, so that the SDK can be held against it. No money anywhere.
 */

export interface FakeSession {
  readonly id: string;
  readonly object: 'checkout.session';
  status: 'open' | 'complete' | 'expired';
  payment_status: 'unpaid' | 'paid';
  amount_total: number;
  currency: string;
  client_reference_id: string | null;
  metadata: Record<string, string>;
  payment_intent: string | null;
  url: string | null;
  readonly success_url: string;
  readonly cancel_url: string;
  readonly words: string;
}

export interface FakeRefund {
  readonly id: string;
  readonly object: 'refund';
  amount: number;
  currency: string;
  payment_intent: string;
  status: 'succeeded' | 'pending' | 'failed';
  metadata: Record<string, string>;
}

export interface FakeEvent {
  readonly id: string;
  readonly object: 'event';
  readonly type: string;
  readonly created: number;
  readonly data: { readonly object: unknown };
}

export interface FakeCardHost {
  readonly key: string;
  readonly webhookSecret: string;
  readonly port: number;
  /** For the environment of a server that is to use it. */
  readonly env: Record<string, string>;
  readonly sessions: Map<string, FakeSession>;
  readonly refunds: Map<string, FakeRefund>;
  /** Every message that was made, delivered or not. */
  readonly events: FakeEvent[];
  /** Where messages go; null: nowhere. */
  webhookUrl: string | null;
  /** While true, messages are made but lost on their way. */
  lose: boolean;
  /** While true, every request is answered 500. */
  down: boolean;
  /** What a refund is answered with. */
  refundStatus: FakeRefund['status'];
  /** Pays a session as its page does. */
  pay(id: string): Promise<void>;
  /** Sends a message (again); gives the status of the answer, 0 without one. */
  deliver(event: FakeEvent): Promise<number>;
  /** The header that signs `body`. */
  sign(body: string, at?: number): string;
  close(): Promise<void>;
}

/** Starts it on this machine only; port 0 takes a free one. */
export async function startFakeCardHost({
  port = 0,
  webhookUrl = null as string | null
} = {}): Promise<FakeCardHost> {
  const key = `sk_test_${randomBytes(12).toString('hex')}`;
  const webhookSecret = `whsec_${randomBytes(16).toString('hex')}`;
  const byKey = new Map<string, unknown>();
  const newName = (kind: string) => `${kind}_${randomBytes(10).toString('hex')}`;

  const event = (type: string, object: unknown): FakeEvent => {
    const made: FakeEvent = {
      id: newName('evt'),
      object: 'event',
      type,
      created: Math.floor(Date.now() / 1000),
      data: { object: structuredClone(object) }
    };
    fake.events.push(made);
    return made;
  };
  const tell = async (type: string, object: unknown): Promise<void> => {
    const made = event(type, object);
    if (!fake.lose) await fake.deliver(made);
  };

  const server = createServer((request, response) => {
    answer(request, response).catch((error: unknown) => {
      response.writeHead(500).end(String(error));
    });
  });

  const fake: FakeCardHost = {
    key,
    webhookSecret,
    port: 0,
    env: {},
    sessions: new Map(),
    refunds: new Map(),
    events: [],
    webhookUrl,
    lose: false,
    down: false,
    refundStatus: 'succeeded',
    async pay(id) {
      const session = fake.sessions.get(id);
      if (!session || session.status !== 'open') throw new Error(`There is no open session ${id}`);
      session.status = 'complete';
      session.payment_status = 'paid';
      session.payment_intent = newName('pi');
      session.url = null;
      await tell('checkout.session.completed', session);
    },
    async deliver(made) {
      if (fake.webhookUrl === null) return 0;
      const body = JSON.stringify(made);
      try {
        const { status } = await fetch(fake.webhookUrl, {
          method: 'POST',
          headers: { 'content-type': 'application/json', 'stripe-signature': fake.sign(body) },
          body
        });
        return status;
      } catch {
        return 0;
      }
    },
    sign(body, at = Math.floor(Date.now() / 1000)) {
      const mac = createHmac('sha256', webhookSecret).update(`${at}.${body}`).digest('hex');
      return `t=${at},v1=${mac}`;
    },
    close: () =>
      new Promise<void>((resolve) => {
        server.closeAllConnections();
        server.close(() => resolve());
      })
  };

  async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const path = new URL(request.url ?? '/', 'http://localhost').pathname;
    const chunks: Buffer[] = [];
    for await (const chunk of request) chunks.push(chunk as Buffer);
    const form = new URLSearchParams(Buffer.concat(chunks).toString('utf8'));
    const page = /^\/pay\/(\w+)(\/leave)?$/.exec(path);
    if (page) return payPage(request, response, page[1]!, page[2] !== undefined);

    const json = (status: number, value: unknown) =>
      response.writeHead(status, { 'content-type': 'application/json' }).end(JSON.stringify(value));
    const refuse = (status: number, type: string, message: string) =>
      json(status, { error: { type, message } });
    if (fake.down) return void refuse(500, 'api_error', 'Down');
    if (request.headers.authorization !== `Bearer ${key}`)
      return void refuse(401, 'invalid_request_error', 'No such key');

    const idempotent = (make: () => unknown): void => {
      const name = String(request.headers['idempotency-key'] ?? '');
      const known = name === '' ? undefined : byKey.get(`${path} ${name}`);
      const value = known ?? make();
      if (name !== '') byKey.set(`${path} ${name}`, value);
      json(200, value);
    };
    const session = /^\/v1\/checkout\/sessions\/(\w+)(\/expire)?$/.exec(path);
    const refund = /^\/v1\/refunds\/(\w+)$/.exec(path);

    if (request.method === 'POST' && path === '/v1/checkout/sessions')
      return idempotent(() => {
        const id = newName('cs');
        const made: FakeSession = {
          id,
          object: 'checkout.session',
          status: 'open',
          payment_status: 'unpaid',
          amount_total: Number(form.get('line_items[0][price_data][unit_amount]')),
          currency: form.get('line_items[0][price_data][currency]') ?? '',
          client_reference_id: form.get('client_reference_id'),
          metadata: { payment: form.get('metadata[payment]') ?? '' },
          payment_intent: null,
          url: `http://localhost:${fake.port}/pay/${id}`,
          success_url: form.get('success_url') ?? '',
          cancel_url: form.get('cancel_url') ?? '',
          words: form.get('line_items[0][price_data][product_data][name]') ?? ''
        };
        fake.sessions.set(id, made);
        return made;
      });
    if (session) {
      const found = fake.sessions.get(session[1]!);
      if (!found) return void refuse(404, 'invalid_request_error', 'No such session');
      if (session[2]) {
        if (found.status !== 'open')
          return void refuse(400, 'invalid_request_error', 'Only open sessions can be expired');
        found.status = 'expired';
        found.url = null;
        event('checkout.session.expired', found);
      }
      return void json(200, found);
    }
    if (request.method === 'POST' && path === '/v1/refunds') {
      const paid = [...fake.sessions.values()].find(
        ({ payment_intent }) => payment_intent !== null && payment_intent === form.get('payment_intent')
      );
      const amount = Number(form.get('amount'));
      const name = String(request.headers['idempotency-key'] ?? '');
      const before = [...fake.refunds.values()]
        .filter((one) => one.payment_intent === paid?.payment_intent && one.status !== 'failed')
        .reduce((sum, one) => sum + one.amount, 0);
      if (!paid) return void refuse(404, 'invalid_request_error', 'No such payment');
      if (!byKey.has(`${path} ${name}`) && before + amount > paid.amount_total)
        return void refuse(400, 'invalid_request_error', 'More than is left of the charge');
      return idempotent(() => {
        const made: FakeRefund = {
          id: newName('re'),
          object: 'refund',
          amount,
          currency: paid.currency,
          payment_intent: paid.payment_intent!,
          status: fake.refundStatus,
          metadata: { payment: form.get('metadata[payment]') ?? '' }
        };
        fake.refunds.set(made.id, made);
        return made;
      });
    }
    if (refund && fake.refunds.has(refund[1]!)) return void json(200, fake.refunds.get(refund[1]!));
    return void refuse(404, 'invalid_request_error', `Nothing at ${path}`);
  }

  async function payPage(
    request: IncomingMessage,
    response: ServerResponse,
    id: string,
    leaves: boolean
  ): Promise<void> {
    const session = fake.sessions.get(id);
    const go = (to: string) => void response.writeHead(303, { location: to }).end();
    if (!session) return void response.writeHead(404).end('No such session');
    if (request.method === 'POST') {
      if (leaves) return go(session.cancel_url);
      await fake.pay(id);
      return go(session.success_url);
    }
    response.writeHead(200, {
      'content-type': 'text/html; charset=utf-8',
      'content-security-policy': "default-src 'none'; style-src 'unsafe-inline'"
    });
    const sum = new Intl.NumberFormat('en-GB', {
      style: 'currency',
      currency: session.currency
    });
    const digits = sum.resolvedOptions().maximumFractionDigits ?? 2;
    response.end(
      `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Card page of the demo</title>` +
        `<meta name="viewport" content="width=device-width, initial-scale=1"><style>` +
        `body{margin:0;background:#F6F1E7;color:#23262B;font:16px/24px system-ui,sans-serif}` +
        `main{max-width:420px;margin:0 auto;padding:32px 16px}p{margin:0 0 16px}` +
        `button{font:inherit;min-height:44px;width:100%;margin:0 0 12px;border-radius:4px;border:1px solid #2F5D7C;` +
        `background:#2F5D7C;color:#FFFDF8}button.quiet{background:#FFFDF8;color:#23262B;border-color:#DDD5C6}` +
        `</style></head><body><main><h1>The demo’s card page</h1>` +
        `<p>${escaped(session.words)}</p><p><b>${escaped(sum.format(session.amount_total / 10 ** digits))}</b></p>` +
        `<p>There is no card and no money here: it is a stand-in on this machine.</p>` +
        (session.status === 'open'
          ? `<form method="post"><button>Pay</button></form>` +
            `<form method="post" action="/pay/${id}/leave"><button class="quiet">Go back without paying</button></form>`
          : `<p>This is ${session.status === 'complete' ? 'paid' : 'over'} already.</p>`) +
        `</main></body></html>`
    );
  }

  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(port, '127.0.0.1', resolve);
  });
  const { port: taken } = server.address() as AddressInfo;
  return Object.assign(fake, {
    port: taken,
    env: {
      WARPWISE_STRIPE_KEY: key,
      WARPWISE_STRIPE_WEBHOOK_SECRET: webhookSecret,
      WARPWISE_STRIPE_HOST: '127.0.0.1',
      WARPWISE_STRIPE_PORT: String(taken),
      WARPWISE_STRIPE_PROTOCOL: 'http'
    }
  });
}

function escaped(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}
