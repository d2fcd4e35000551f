import { FINAL_STATES } from '@/lib/analysis-facts';
import type { AnalysisView } from '@/lib/views/analysis-view';

const LOOK_EVERY_MS = 700;
/** A line now and then keeps proxies from taking the silence for an end. */
const SIGN_OF_LIFE_MS = 15_000;

/**
 * Server-sent events named `progress` with the analysis, at first and at each change, until it is
 * in a final state or the reader leaves.
 */
export function progressStream(
  read: () => Promise<AnalysisView>,
  signal: AbortSignal,
  requestId: string,
): Response {
  const encoder = new TextEncoder();
  let left = false;
  const body = new ReadableStream<Uint8Array>({
    async start(controller) {
      const say = (text: string) => controller.enqueue(encoder.encode(text));
      let last = '';
      let saidAtMs = Date.now();
      try {
        while (!left && !signal.aborted) {
          const analysis = await read();
          const data = JSON.stringify(analysis);
          if (data !== last) {
            say(`event: progress\ndata: ${data}\n\n`);
            [last, saidAtMs] = [data, Date.now()];
          } else if (Date.now() - saidAtMs > SIGN_OF_LIFE_MS) {
            say(': still there\n\n');
            saidAtMs = Date.now();
          }
          if (FINAL_STATES.includes(analysis.state)) break;
          await pause(LOOK_EVERY_MS, signal);
        }
        if (!left) controller.close();
      } catch (cause) {
        // The reader connects again by itself and gets the reason as a problem document.
        if (!left) controller.error(cause);
      }
    },
    cancel() {
      left = true;
    },
  });
  return new Response(body, {
    headers: {
      'Content-Type': 'text/event-stream',
      'Cache-Control': 'private, no-store, no-transform',
      'X-Accel-Buffering': 'no',
      'X-Request-Id': requestId,
    },
  });
}

function pause(ms: number, signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    const end = () => {
      clearTimeout(timer);
      signal.removeEventListener('abort', end);
      resolve();
    };
    const timer = setTimeout(end, ms);
    signal.addEventListener('abort', end);
  });
}
