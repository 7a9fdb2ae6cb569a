/*
 * The network between the tablets and the server. A request stays on its way until the run lets it arrive, and its
 * reply stays on its way until the run lets that arrive: so any of them may be lost, late, repeated or overtaken.
 */
import type { Actor } from '@/server/actor';
import type { Reply, SimServer } from './server';

/** A request on its way, or the reply to it. */
export interface Call {
  number: number;
  from: string;
  path: string;
  init: RequestInit;
  session: () => Actor | undefined;
  /** Whether anybody waits for the reply: not once the page is gone. */
  isAwaited: () => boolean;
  reply?: Reply;
  succeed: (response: Response) => void;
  fail: (error: Error) => void;
}

/** What the server said to whom, as it said it. */
export type Listener = (call: Call, reply: Reply) => void;

export class Network {
  /** On the way to the server. */
  there: Call[] = [];
  /** Answered, and on the way back. */
  back: Call[] = [];
  /** Copies that something on the way kept and will send once more. */
  echoes: Call[] = [];
  private count = 0;

  constructor(
    private readonly server: SimServer,
    private readonly outside: <T>(work: () => Promise<T>) => Promise<T>,
    private readonly listener: Listener,
  ) {}

  /** Sends a request; what comes of it is for the run to say. */
  send(call: Pick<Call, 'from' | 'path' | 'init' | 'session' | 'isAwaited'>): Promise<Response> {
    this.count += 1;
    const number = this.count;
    return new Promise((succeed, fail) => {
      this.there.push({ ...call, number, succeed, fail });
    });
  }

  /** The request reaches the server, which does its work; the reply sets out. */
  async arrive(call: Call): Promise<void> {
    this.there = this.there.filter((one) => one !== call);
    const reply = await this.serve(call);
    this.back.push({ ...call, reply });
  }

  /** A copy of an earlier request reaches the server; nobody waits for what it says. */
  async arriveAgain(call: Call): Promise<void> {
    this.echoes = this.echoes.filter((one) => one !== call);
    await this.serve(call);
  }

  private async serve(call: Call): Promise<Reply> {
    const reply = await this.outside(() => this.server.answer(call.path, call.init, call.session()));
    this.listener(call, reply);
    return reply;
  }

  /** The reply reaches whoever asked, whole. */
  bringBack(call: Call): void {
    const { text, status, type } = this.take(call);
    if (call.isAwaited()) call.succeed(new Response(text, { status, headers: { 'content-type': type } }));
  }

  /** The reply breaks off in the middle; with `isToldWhole` the line pretends that it was all. */
  bringHalf(call: Call, isToldWhole: boolean): void {
    const { text, status } = this.take(call);
    if (!call.isAwaited()) return;
    const half = text.slice(0, Math.floor(text.length / 2));
    if (isToldWhole) {
      call.succeed(new Response(half, { status }));
      return;
    }
    const broken = new ReadableStream({
      start(controller) {
        controller.enqueue(new TextEncoder().encode(half));
        controller.error(new TypeError('terminated'));
      },
    });
    call.succeed(new Response(broken, { status }));
  }

  /** Something else answers in the server's stead: a gateway, or a network's sign-in page. */
  answerForeign(call: Call, status: number): void {
    this.take(call);
    if (call.isAwaited()) call.succeed(new Response('<html>Sign in to the network</html>', { status }));
  }

  /** The request or its reply is lost, and the browser says so. */
  lose(call: Call): void {
    this.take(call);
    if (call.isAwaited()) call.fail(new TypeError('Failed to fetch'));
  }

  private take(call: Call): Reply {
    this.there = this.there.filter((one) => one !== call);
    this.back = this.back.filter((one) => one !== call);
    return call.reply ?? { status: 0, text: '', type: '' };
  }
}
