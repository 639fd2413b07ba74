/** Text that is safe to stand in a page as it is. */
export class Html {
  readonly text: string;
  constructor(text: string) {
    this.text = text;
  }
}

type Part = string | number | Html | null | readonly Html[];

/** Builds a piece of a page; everything put in is escaped unless it is a piece itself. */
export function html(pieces: TemplateStringsArray, ...parts: readonly Part[]): Html {
  return new Html(pieces.reduce((text, piece, index) => text + render(parts[index - 1] ?? null) + piece));
}

function render(part: Part): string {
  if (part === null) return '';
  if (part instanceof Html) return part.text;
  if (typeof part === 'object') return part.map((piece) => piece.text).join('');
  return escapeText(String(part));
}

const ESCAPES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

function escapeText(text: string): string {
  return text.replace(/[&<>"']/g, (character) => ESCAPES[character] ?? character);
}
