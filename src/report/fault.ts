/** Why no verdict could be reached for a spec: each message one line for people. */
export interface Fault {
  specFile: string;
  messages: readonly string[];
}
