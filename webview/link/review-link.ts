import type { ReviewEvent } from '../../core/protocol.ts';
import type { ReviewCalls } from '../../core/review/want.ts';
import type { Link } from './link.ts';

export type ReviewLink = Link<ReviewCalls, ReviewEvent>;
