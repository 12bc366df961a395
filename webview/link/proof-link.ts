import type { HostCalls, HostEvent } from '../../core/protocol.ts';
import type { Link } from './link.ts';

export type ProofLink = Link<HostCalls, HostEvent>;
