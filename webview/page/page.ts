import { WORKER_BLOCK } from '../../core/export/document.ts';
import type { HostCalls, HostEvent, ReviewEvent } from '../../core/protocol.ts';
import type { ReviewCalls } from '../../core/review/want.ts';
import { carriedJson } from '../link/carried.ts';
import { openEmbeddedLink } from '../link/embedded.ts';
import { openEmbeddedReview } from '../link/embedded-review.ts';
import { openHostLink, type VsCodeApi } from '../link/host.ts';
import type { ProofLink } from '../link/proof-link.ts';
import type { ReviewLink } from '../link/review-link.ts';
import './page.css';
import { ProofPage } from './proof/proof-page.ts';
import { ReviewBenchLink } from './review/bench-link.ts';
import { ReviewModel } from './review/model.ts';
import { ReviewPage } from './review/review-page.ts';
import { BenchLink } from './state/bench-link.ts';
import { Model } from './state/model.ts';

declare function acquireVsCodeApi(): VsCodeApi;

const review = openEmbeddedReview(document);
const proof = openEmbeddedLink(document);
if (review !== null) showReview(review);
else if (proof !== null) showProof(proof);
else if (document.body.dataset.about === 'review') {
  showReview(openHostLink<ReviewCalls, ReviewEvent>(acquireVsCodeApi(), window, ['texture']));
} else {
  showProof(
    openHostLink<HostCalls, HostEvent>(acquireVsCodeApi(), window, [
      'source',
      'settings',
      'preferences',
      'built',
      'export',
    ]),
  );
}

function showProof(link: ProofLink): void {
  const model = new Model(link, async (changed) => new BenchLink(await startWorker(), changed));
  const page = new ProofPage();
  page.model = model;
  begin(page, model);
}

function showReview(link: ReviewLink): void {
  const model = new ReviewModel(link, async (changed) => new ReviewBenchLink(await startWorker(), changed));
  const page = new ReviewPage();
  page.model = model;
  begin(page, model);
}

function begin(page: HTMLElement, model: { start(): Promise<void>; close(): void }): void {
  document.body.append(page);
  window.addEventListener('pagehide', () => model.close());
  void model.start();
}

/** A webview runs workers from blobs alone, so the worker's code is read first: an exported page carries it, and whoever else opens
 *  the page says where it is. */
async function startWorker(): Promise<Worker> {
  const code = carriedJson(document, WORKER_BLOCK) ?? (await fetchWorker());
  const url = URL.createObjectURL(new Blob([code as string], { type: 'text/javascript' }));
  try {
    return new Worker(url);
  } finally {
    // The worker has read its script long before; until it has, the blob must live.
    setTimeout(() => URL.revokeObjectURL(url), 10_000);
  }
}

async function fetchWorker(): Promise<string> {
  const { worker } = document.body.dataset;
  if (worker === undefined) throw new Error('The page does not say where its worker is');
  const response = await fetch(worker);
  if (!response.ok) throw new Error(`The worker could not be loaded: ${response.status}`);
  return response.text();
}
