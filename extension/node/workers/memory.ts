import { totalmem } from 'node:os';

/** Lets jobs hold bytes as long as all of them together stay within a budget. First come, first served, so that a large job is
 *  not kept waiting by small ones for ever; one that is alone is always let in. */
export interface MemoryGate {
  /** Resolves when `bytes` may be held. */
  enter(bytes: number): Promise<void>;
  leave(bytes: number): void;
}

export function openMemoryGate(budgetBytes: number): MemoryGate {
  const waiting: { readonly bytes: number; readonly enter: () => void }[] = [];
  let heldBytes = 0;

  return {
    enter(bytes) {
      return new Promise((enter) => {
        waiting.push({ bytes, enter });
        letIn();
      });
    },
    leave(bytes) {
      heldBytes -= bytes;
      letIn();
    },
  };

  function letIn(): void {
    while (waiting.length > 0 && (heldBytes === 0 || heldBytes + waiting[0].bytes <= budgetBytes)) {
      const next = waiting.shift();
      if (next === undefined) return;
      heldBytes += next.bytes;
      next.enter();
    }
  }
}

/** A quarter of the memory that this process may use, in bytes. */
export function defaultMemoryBytes(): number {
  // 0 or a number beyond the machine's memory where nothing constrains the process.
  const constrained = process.constrainedMemory?.() ?? 0;
  const total = totalmem();
  return Math.floor((constrained > 0 && constrained < total ? constrained : total) / 4);
}
