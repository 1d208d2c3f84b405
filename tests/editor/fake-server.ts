// A server for the provider's tests: takes updates, answers repeats with the first one's number, and streams to whoever listens.
import * as Y from "yjs";
import { toBase64 } from "../../editor/base64.ts";
import { seedPage } from "../../editor/schema/index.ts";

export class FakeEvents extends EventTarget {
  readyState = 1;
  close(): void {
    this.readyState = 2;
  }
  hear(name: string, data: object): void {
    if (this.readyState === 1) this.dispatchEvent(new MessageEvent(name, { data: JSON.stringify(data) }));
  }
}

export type Mode = "up" | "down" | "deaf" | "signed-out" | "signed" | "busy" | "invalid";

export class FakeServer {
  readonly doc = new Y.Doc({ gc: false });
  readonly accepted = new Map<string, number>();
  /** every post that reached the server, repeats included */
  readonly posts: { id: string; bytes: Uint8Array; person: string | null }[] = [];
  readonly presence: string[] = [];
  mode: Mode = "up";
  sessionOf = "p1";
  seq = 1;
  streams: FakeEvents[] = [];

  constructor() {
    Y.applyUpdate(this.doc, seedPage());
  }

  readonly openEvents = (): FakeEvents => {
    const stream = new FakeEvents();
    this.streams.push(stream);
    queueMicrotask(() => {
      if (this.mode === "down" || this.mode === "signed-out") {
        stream.readyState = 2;
        stream.dispatchEvent(new Event("error"));
        return;
      }
      stream.hear("snapshot", {
        seq: this.seq,
        state: toBase64(Y.encodeStateAsUpdate(this.doc)),
        vector: toBase64(Y.encodeStateVector(this.doc)),
      });
    });
    return stream;
  };

  readonly ask: typeof fetch = async (input, init) => {
    const url = String(input);
    if (this.mode === "down") throw new TypeError("no line");
    if (url.endsWith("/api/auth/session")) {
      return Response.json({ person: this.mode === "signed-out" ? null : { id: this.sessionOf } });
    }
    if (this.mode === "signed-out") return problem(401, "session.ended");
    if (url.endsWith("/stray")) return Response.json({ updates: [] });
    if (url.endsWith("/presence")) {
      this.presence.push(String(init?.body));
      return Response.json({ told: true });
    }
    return this.take(new Headers(init?.headers), init?.body);
  };

  private async take(headers: Headers, body: unknown): Promise<Response> {
    const id = headers.get("x-update-id") ?? "";
    if (!(body instanceof Blob)) throw new Error("an update is sent as bytes");
    const bytes = new Uint8Array(await body.arrayBuffer());
    this.posts.push({ id, bytes, person: headers.get("x-person") });
    if (this.mode === "busy") return problem(503, "server.busy");
    if (this.mode === "signed") return problem(409, "revision.not-draft", { kept: true });
    if (this.mode === "invalid") return problem(422, "page.invalid");
    let seq = this.accepted.get(id);
    if (seq === undefined) {
      this.seq += 1;
      seq = this.seq;
      this.accepted.set(id, seq);
      Y.applyUpdate(this.doc, bytes);
      if (this.doc.store.pendingStructs !== null) throw new Error("an update came before one that it builds on");
      for (const stream of this.streams) stream.hear("update", { seq, bytes: toBase64(bytes) });
    }
    // Committed, and then the line went: the browser never hears of it.
    if (this.mode === "deaf") throw new TypeError("the line dropped");
    return Response.json({ seq });
  }

  cut(): void {
    this.mode = "down";
    for (const stream of this.streams) {
      if (stream.readyState === 2) continue;
      stream.readyState = 2;
      stream.dispatchEvent(new Event("error"));
    }
  }

  get text(): string {
    return this.doc.getXmlFragment("page").toString();
  }
}

function problem(status: number, code: string, values: object = {}): Response {
  return Response.json({ type: `/problems/${code}`, title: code, status, code, values }, { status });
}
