import type { ProofOrder } from '../../core/export/order.ts';
import { makeSheet } from '../../core/export/sheet.ts';
import { webPorts } from './ports.ts';

/** Draws a proof sheet on the extension host's own thread, which the other messages get their turns on. Answers a PNG file. Throws
 *  Refusal and Cancelled. */
export async function drawSheet(
  order: ProofOrder,
  token: { readonly isCancellationRequested: boolean },
): Promise<Uint8Array> {
  const cancel = {
    get cancelled() {
      return token.isCancellationRequested;
    },
  };
  const pause = () => new Promise<void>((resolve) => setTimeout(resolve, 0));
  const { png } = await makeSheet(order, { ...webPorts, pause }, cancel);
  return png;
}
