import { createServer, type Socket } from 'node:net';

/** A mail as a mail server gets it. */
export interface ReceivedMail {
  from: string;
  to: string[];
  /** The bytes of DATA, dots unstuffed. */
  raw: string;
}

/** The reply to a command instead of the usual one; `hang-up` cuts the line. */
export type SmtpScript = (verb: string, line: string) => string | 'hang-up' | null;

export interface SmtpListener {
  url: string;
  port: number;
  received: ReceivedMail[];
  /** From now on. */
  script: (script: SmtpScript) => void;
  close: () => Promise<void>;
}

const USUAL: Record<string, string> = { RSET: '250 OK', QUIT: '221 Bye', NOOP: '250 OK' };

/** A mail server on loopback that speaks as much of RFC 5321 as a client needs, and can be told to misbehave. */
export async function startSmtpListener(port = 0): Promise<SmtpListener> {
  const received: ReceivedMail[] = [];
  const sockets = new Set<Socket>();
  let script: SmtpScript = () => null;
  const server = createServer((socket) => {
    sockets.add(socket);
    socket.on('close', () => sockets.delete(socket));
    socket.on('error', () => undefined);
    const say = (line: string) => socket.write(`${line}\r\n`);
    let buffer = '';
    let data: string[] | null = null;
    let mail: ReceivedMail = { from: '', to: [], raw: '' };
    const reply = (verb: string, line: string, usual: string) => {
      const told = script(verb, line);
      if (told === 'hang-up') socket.destroy();
      else say(told ?? usual);
      return told === null;
    };
    say('220 catcher.test ESMTP');
    socket.on('data', (piece) => {
      buffer += piece.toString('utf8');
      for (let at = buffer.indexOf('\r\n'); at >= 0; at = buffer.indexOf('\r\n')) {
        const line = buffer.slice(0, at);
        buffer = buffer.slice(at + 2);
        if (data) {
          if (line !== '.') data.push(line.startsWith('.') ? line.slice(1) : line);
          else {
            mail.raw = data.join('\r\n');
            data = null;
            if (reply('END', '', '250 Queued')) received.push(mail);
            mail = { from: '', to: [], raw: '' };
          }
          continue;
        }
        const verb = line.slice(0, 4).toUpperCase();
        const take = (act: () => unknown, usual = '250 OK') => {
          if (reply(verb, line, usual)) act();
        };
        const path = /<([^>]*)>/.exec(line)?.[1] ?? '';
        if (verb === 'EHLO' || verb === 'HELO') reply(verb, line, '250 catcher.test');
        else if (verb === 'MAIL') take(() => (mail.from = path));
        else if (verb === 'RCPT') take(() => mail.to.push(path));
        else if (verb === 'DATA') take(() => (data = []), '354 Go on');
        else reply(verb, line, USUAL[verb] ?? '500 What?');
      }
    });
  });
  await new Promise<void>((resolve) => server.listen(port, '127.0.0.1', resolve));
  const address = server.address() as { port: number };
  return {
    url: `smtp://127.0.0.1:${address.port}`,
    port: address.port,
    received,
    script: (next) => (script = next),
    close: () =>
      new Promise<void>((resolve) => {
        for (const socket of sockets) socket.destroy();
        server.close(() => resolve());
      }),
  };
}

/** Headers of a mail by lower-case name, folded lines joined (RFC 5322, 2.2.3). */
export function headersOf(raw: string): Record<string, string> {
  const head = raw.slice(0, raw.indexOf('\r\n\r\n')).replace(/\r\n[ \t]+/g, ' ');
  return Object.fromEntries(
    head.split('\r\n').map((line) => {
      const at = line.indexOf(':');
      return [line.slice(0, at).toLowerCase(), line.slice(at + 1).trim()];
    }),
  );
}
