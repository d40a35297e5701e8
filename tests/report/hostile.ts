/** Names that a spec or an image may hold and that have harmed outputs of other programs. */
export const hostileNames: Record<string, string> = {
  quotes: `it's "quoted" \`back\``,
  'angle brackets': '<script>alert(1)</script><!-- -->',
  ampersand: '&amp; &#0; & &lt;',
  newlines: 'first\nsecond\r\nthird\rfourth',
  'workflow command': '::error file=x,line=1::taken over',
  'end of character data': 'before ]]> after <![CDATA[ again',
  'right to left': 'safe\u202Egpj.exe\u2066\u200F',
  'control characters': 'bell\u0007 escape\u001b[31m red backspace\b form\f C1\u0085\u009b',
  'NUL and what is no character': 'a\u0000b\uFFFE\uFFFF',
  'half a surrogate pair': 'x\ud800y\udc00z',
  'line separators': 'a\u2028b\u2029c',
  'table and link': '| a | [x](javascript:alert(1)) ![y](http://z) *b* _c_ ~~d~~ # e',
  'mention and reference': '@everyone #1 GH-2 https://example.com <b>',
  percent: '%0A%0D%25 100 %',
  tags: 'tag\u{e0041}\u{e007f}',
  'key of every object': '__proto__',
  long: 'n'.repeat(500),
  emoji: '👩‍🔧'.repeat(40),
};

/** Characters which no output for people may hold as they are; line ends and tabs apart. */
export const harmful = /(?![\n\t])[\p{Cc}\u200e\u200f\u2028-\u202e\u2066-\u2069\ufffe\uffff]/u;
