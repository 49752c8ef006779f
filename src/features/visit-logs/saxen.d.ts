declare module 'saxen' {
  type Decode = (text: string) => string;
  /** The part of the parser that is used here; it has no types of its own. */
  export class Parser {
    on(event: 'openTag', heard: (name: string, attributes: () => Record<string, string>, decode: Decode) => void): this;
    on(event: 'closeTag', heard: (name: string, decode: Decode) => void): this;
    on(event: 'text', heard: (text: string, decode: Decode) => void): this;
    on(event: 'cdata', heard: (text: string) => void): this;
    on(event: 'error', heard: (error: Error) => void): this;
    write(xml: string): this;
    end(): Error | null;
  }
}
