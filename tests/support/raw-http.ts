import {connect, type Socket} from 'node:net';

/** A connection that sends what it is told, byte for byte, and keeps what comes back. */
export interface RawConnection {
  readonly socket: Socket;
  /** All bytes received so far, one character each. */
  received(): string;
  send(bytes: string | Uint8Array): void;
  /** Waits until what was received fits the pattern. */
  until(pattern: RegExp, milliseconds?: number): Promise<string>;
  /** Waits until the other side has closed. */
  closed(milliseconds?: number): Promise<string>;
}

export function openRaw(baseUrl: string): RawConnection {
  const {hostname, port} = new URL(baseUrl);
  const socket = connect(Number(port), hostname);
  let text = '';
  let isClosed = false;
  socket.on('data', chunk => (text += chunk.toString('latin1')));
  // A reset is one of the ways in which the other side ends.
  socket.on('error', () => undefined);
  socket.on('close', () => (isClosed = true));
  const when = async (isSo: () => boolean, what: string, milliseconds: number): Promise<string> => {
    const end = performance.now() + milliseconds;
    while (!isSo()) {
      if (performance.now() > end) throw new Error(`${what} did not come; received: ${text}`);
      await new Promise(done => setTimeout(done, 2));
    }
    return text;
  };
  return {
    socket,
    received: () => text,
    send: bytes => void socket.write(bytes),
    until: (pattern, milliseconds = 5000) =>
      when(() => pattern.test(text), String(pattern), milliseconds),
    closed: (milliseconds = 5000) => when(() => isClosed, 'the end', milliseconds),
  };
}

/** Sends a request as it stands and reads the one answer to it. */
export async function sendRaw(baseUrl: string, request: string | Uint8Array): Promise<Response> {
  const connection = openRaw(baseUrl);
  connection.send(request);
  try {
    return await answerOn(connection);
  } finally {
    connection.socket.destroy();
  }
}

/** Waits for a whole answer, of known length, and reads it. */
export async function answerOn(connection: RawConnection): Promise<Response> {
  await connection.until(/\r\n\r\n/);
  const length = Number(/\r\ncontent-length: (\d+)/i.exec(connection.received())?.[1] ?? 0);
  const start = connection.received().indexOf('\r\n\r\n') + 4;
  await connection.until(new RegExp(`^[^]{${start + length}}`));
  return parseAnswer(connection.received());
}

/** Reads one answer; more after it is a fault. */
export function parseAnswer(text: string): Response {
  const [head, ...rest] = text.split('\r\n\r\n');
  const [line, ...fields] = head.split('\r\n');
  const status = Number(/^HTTP\/1\.1 (\d{3}) /.exec(line)?.[1]);
  const headers = new Headers();
  for (const field of fields) {
    const colon = field.indexOf(':');
    headers.append(field.slice(0, colon), field.slice(colon + 1).trim());
  }
  const body = Buffer.from(rest.join('\r\n\r\n'), 'latin1');
  const length = Number(headers.get('content-length') ?? 0);
  if (body.length !== length) {
    throw new Error(`the answer has ${body.length} bytes where it says ${length}: ${text}`);
  }
  return new Response(length > 0 ? body : null, {status, headers});
}
