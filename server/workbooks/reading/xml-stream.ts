import { SaxesParser } from 'saxes';
import { toDamaged, toSuspicious } from './workbook-archive.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';

const DEEPEST_NESTING = 100;

/** What a reader of one part wants to hear. Names come without their namespace prefix. */
export interface XmlListener {
  open(name: string, attributes: Record<string, string>): void;
  close(name: string): void;
  text(text: string): void;
}

/**
 * Feeds a part of a workbook to a listener and yields after each piece, so that the caller can hand on what has come together.
 * Document type declarations are refused, so no entity is ever defined or fetched. Memory is bounded by `unbrokenCharacters`.
 */
export async function* streamXml(
  chunks: AsyncIterable<Buffer>,
  listener: XmlListener,
  limits: { unbrokenCharacters: number },
): AsyncGenerator<void> {
  const parser = new SaxesParser({ position: false });
  let unbroken = 0;
  let depth = 0;
  parser.on('error', (error) => {
    throw toDamaged(error);
  });
  parser.on('doctype', () => {
    throw toSuspicious('It declares a document type.');
  });
  parser.on('opentag', (tag) => {
    unbroken = 0;
    depth += 1;
    if (depth > DEEPEST_NESTING) throw toSuspicious('Its elements are nested too deeply.');
    listener.open(dropPrefix(tag.name), tag.attributes as Record<string, string>);
  });
  parser.on('closetag', (tag) => {
    unbroken = 0;
    depth -= 1;
    listener.close(dropPrefix(tag.name));
  });
  parser.on('text', (text) => listener.text(text));
  parser.on('cdata', (text) => listener.text(text));
  let decoder: TextDecoder | null = null;
  try {
    for await (const chunk of chunks) {
      decoder ??= new TextDecoder(detectXmlEncoding(chunk), { fatal: true });
      const text = decoder.decode(chunk, { stream: true });
      unbroken += text.length;
      parser.write(text);
      if (unbroken > limits.unbrokenCharacters) throw toSuspicious('A single text in it is longer than a cell can be.');
      yield;
    }
    if (decoder) parser.write(decoder.decode());
    parser.close();
    yield;
  } catch (error) {
    throw error instanceof UnreadableFileError ? error : toDamaged(error);
  }
}

function dropPrefix(name: string): string {
  const colon = name.indexOf(':');
  return colon < 0 ? name : name.slice(colon + 1);
}

function detectXmlEncoding(head: Buffer): string {
  if (head[0] === 0xff && head[1] === 0xfe) return 'utf-16le';
  if (head[0] === 0xfe && head[1] === 0xff) return 'utf-16be';
  if (head[0] === 0x3c && head[1] === 0) return 'utf-16le';
  if (head[0] === 0 && head[1] === 0x3c) return 'utf-16be';
  const declared = /^<\?xml[^>]*encoding=["']([\w-]+)["']/.exec(head.subarray(0, 200).toString('latin1'));
  const encoding = declared?.[1]?.toLowerCase() ?? 'utf-8';
  return encoding === 'utf-8' || encoding === 'utf8' || encoding === 'us-ascii' ? 'utf-8' : encoding;
}

/** `_x000D_` stands for a character that XML can't hold (ECMA-376 part 1, §22.9.2.19). */
export function unescapeText(text: string): string {
  if (!text.includes('_x')) return text;
  return text.replace(/_x([0-9A-Fa-f]{4})_/g, (_whole, code: string) => String.fromCharCode(Number.parseInt(code, 16)));
}
