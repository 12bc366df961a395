import { say } from '../../../core/problem.ts';
import type { ExportOrder } from '../../../core/protocol.ts';
import { t } from '../words/t.ts';
import type { Model } from './model.ts';
import { writeState } from './state.ts';

/** Has the host make a file of the proof as it is shown now, and says what became of it. */
export async function exportProof(model: Model, form: ExportOrder['form']): Promise<void> {
  const { reply } = await model.link.ask('export', { form, state: writeState(model.state) });
  if ('problem' in reply) return model.say({ text: say(reply.problem), kind: 'failed' });
  const { path } = reply.ok;
  const name = path?.slice(path.lastIndexOf('/') + 1);
  model.say(name === undefined ? null : { text: t('Wrote {path}.', { path: name }), kind: 'said' });
}
