import { runTests } from './runner.ts';
import './extension.ts';
import './settings.ts';
import './build.ts';
import './tasks.ts';
import './proof.ts';

/** What the extension host calls. */
export function run(): Promise<void> {
  return runTests();
}
