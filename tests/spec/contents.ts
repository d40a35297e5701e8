/** A heading of a page, with the anchor that Markdown viewers give it. */
export interface Heading {
  rank: number;
  title: string;
  anchor: string;
}

/**
 * The headings of a page outside its code. An anchor is the title in small letters, without punctuation, with hyphens for
 * spaces; of headings with one title the later ones are numbered from 1 (common practice).
 */
export function headingsOf(page: string): Heading[] {
  const counts = new Map<string, number>();
  return [...page.replaceAll(/^```.*?^```/gms, '').matchAll(/^(#+) (.*)$/gm)].map(([, marks, title]) => {
    const plain = title
      .toLowerCase()
      .replaceAll(/[^\p{L}\p{N}_ -]/gu, '')
      .replaceAll(' ', '-');
    const before = counts.get(plain) ?? 0;
    counts.set(plain, before + 1);
    return { rank: marks.length, title, anchor: before === 0 ? plain : `${plain}-${before}` };
  });
}

/** A list of contents: a line for each chapter, and one for its sections. */
export function contentsOf(page: string): string {
  const lines: string[] = [];
  let sections: string[] = [];
  const flush = (): void => {
    if (sections.length > 0) lines.push(`  - ${sections.join(' · ')}`);
    sections = [];
  };
  for (const { rank, title, anchor } of headingsOf(page)) {
    const link = `[${title}](#${anchor})`;
    if (rank === 3) sections.push(link);
    if (rank !== 2) continue;
    flush();
    lines.push(`- ${link}`);
  }
  flush();
  return lines.join('\n');
}
