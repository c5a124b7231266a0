/** A formula written in one line of text, set as MathML: "σ_{obs}(W) = \int G(W' − W) σ_{rad}(W') dW'". */
import type { ComponentChild, JSX } from "preact";

/** Words that stand for one sign or one construction. */
const WORDS: Record<string, string> = { int: "∫", sum: "∑", partial: "∂", cdot: "·", pm: "±" };

/**
 * The formula. One letter is a variable; several letters together are a word; `_x ^x` and `_{...}` set low and high;
 * `\frac{}{}`, `\sqrt{}`; `\int` and the like are signs.
 */
export function Formula({ text }: { text: string }): JSX.Element {
  const reader = new Reader(text);
  return (
    <math display="block">
      <mrow>{reader.row()}</mrow>
    </math>
  );
}

class Reader {
  private readonly tokens: string[];
  private at = 0;

  constructor(text: string) {
    this.tokens = text.match(/\\[a-z]+|[\d.]+|[A-Za-z]+(?:-[a-z]+)*|\s+|[^\s]/gu)?.filter((token) => token.trim() !== "") ?? [];
  }

  /** Everything up to a closing brace or the end. */
  row(): ComponentChild[] {
    const found: ComponentChild[] = [];
    while (this.at < this.tokens.length && this.tokens[this.at] !== "}") found.push(this.item());
    return found;
  }

  private item(): ComponentChild {
    const base = this.one();
    let [low, high]: [ComponentChild, ComponentChild] = [null, null];
    for (;;) {
      const mark = this.tokens[this.at];
      if (mark === "_" && low === null) low = this.next();
      else if (mark === "^" && high === null) high = this.next();
      else break;
    }
    if (low !== null && high !== null) return <msubsup>{[base, low, high]}</msubsup>;
    if (low !== null) return <msub>{[base, low]}</msub>;
    return high === null ? base : <msup>{[base, high]}</msup>;
  }

  private next(): ComponentChild {
    this.at += 1;
    return this.one();
  }

  private one(): ComponentChild {
    const token = this.tokens[this.at] ?? "";
    this.at += 1;
    if (token === "{") {
      const inside = this.row();
      this.at += 1;
      return <mrow>{inside}</mrow>;
    }
    if (token === "\\frac") return <mfrac>{[this.one(), this.one()]}</mfrac>;
    if (token === "\\sqrt") return <msqrt>{this.one()}</msqrt>;
    if (token.startsWith("\\")) return <mo>{WORDS[token.slice(1)] ?? token}</mo>;
    if (/^[\d.]+$/.test(token)) return <mn>{token}</mn>;
    if (/^[A-Za-z]{2,}/.test(token)) return <mtext>{token}</mtext>;
    return /\p{L}/u.test(token) ? <mi>{token}</mi> : <mo>{token}</mo>;
  }
}
