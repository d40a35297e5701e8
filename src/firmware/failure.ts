/** Every way in which a coefficient cannot be read. Closed: a new cause gets a code of its own. */
export type FirmwareErrorCode =
  | 'not_an_image'
  | 'malformed_image'
  | 'unsupported'
  | 'bad_request'
  | 'bad_format'
  | 'format_mismatch'
  | 'needs_format'
  | 'no_such_symbol'
  | 'no_such_member'
  | 'index_out_of_range'
  | 'not_a_number'
  | 'no_debug_information'
  | 'no_contents'
  | 'ambiguous_name'
  | 'garbage_collected'
  | 'no_fixed_place'
  | 'incomplete_type'
  | 'sources_disagree'
  | 'needs_relocation'
  | 'not_exact'
  | 'build_failed'
  | 'build_too_slow'
  | 'image_missing';

/** A coefficient could not be read, or the build that makes the image failed. The message is one line, for people. */
export class FirmwareError extends Error {
  /** The cause, for programs. */
  readonly code: FirmwareErrorCode;
  /** Name of the coefficient in the spec, where the failure belongs to one. */
  requestName?: string;

  constructor(code: FirmwareErrorCode, message: string, requestName?: string) {
    super(oneLine(message));
    this.name = 'FirmwareError';
    this.code = code;
    this.requestName = requestName;
  }
}

/** Whatever a name in an image holds, it moves no cursor and breaks no line. */
function oneLine(message: string): string {
  return message.replace(/\s*[\r\n]+\s*/g, ' ').replace(/[^\x20-\x7e\u00a0-\ud7ff\ue000-\ufffd]/g, '?');
}

/** Names from an image are untrusted text: printable, quoted and of bounded length. */
export function quoted(name: string): string {
  const printable = name.replace(/[^\x20-\x7e\u00a0-\ud7ff]/g, '?');
  return `“${printable.length > 120 ? `${printable.slice(0, 117)}...` : printable}”`;
}
