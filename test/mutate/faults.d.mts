export interface Fault {
  readonly law: string;
  readonly file: string;
  readonly find: string;
  readonly replace: string;
  readonly tests: string;
  readonly name?: string;
}

export declare const faults: readonly Fault[];
