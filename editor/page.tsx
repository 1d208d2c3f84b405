"use client";
// The page on an open line: what is written, with everything that helps to write it.
import { useQuery, useQueryClient } from "@tanstack/react-query";
import { EditorContent, useEditor } from "@tiptap/react";
import { useCallback, useEffect, useMemo, useRef, useState } from "react";
import { type CompoundItem, compoundsByIdQuery } from "../components/query/compounds.ts";
import { useAnnounce } from "../components/ui/live-region.tsx";
import { insertAttachment } from "./commands/insert.ts";
import { CompoundDialog, type CompoundRequest, FormulaDialog, LinkDialog, type LinkRequest } from "./dialogs.tsx";
import { HeadFields } from "./head-fields.tsx";
import { pageViews } from "./nodes/views.tsx";
import { EMPTY_OUTLINE, type Outline, othersOn, outlineOf } from "./outline.ts";
import { type FormulaRequest, type PageContextValue, PageProvider } from "./page-context.tsx";
import { Suggest, type SuggestKeys } from "./plugins/suggest.ts";
import { TableKeys } from "./plugins/table-keys.ts";
import { Tidy } from "./plugins/tidy.ts";
import { Together } from "./plugins/together.ts";
import { isClosedToTyping, type PageLine, type Provider } from "./provider.ts";
import type { Asking } from "./put-in.ts";
import { Refused } from "./refused.tsx";
import { wordsOfStatus } from "./save-status.ts";
import { extensionsOfPage } from "./schema/nodes.ts";
import { SuggestList } from "./suggest-list.tsx";
import { PageToolbar } from "./toolbar.tsx";
import { UploadList } from "./upload-list.tsx";
import { useUploads } from "./uploads.ts";

type PageProps = {
  revisionId: string;
  person: { id: string; name: string };
  provider: Provider;
  line: PageLine;
  decimalSign: "." | ",";
  timeZone: string;
  head: { recordedAt: string };
  onOutline?: (outline: Outline) => void;
};

type Asked =
  | { kind: "link"; request: LinkRequest }
  | { kind: "formula"; request: FormulaRequest }
  | { kind: "compound"; request: CompoundRequest };

const OUTLINE_MS = 400;

export function Page({ revisionId, person, provider, line, decimalSign, timeZone, head, onOutline }: PageProps) {
  const isEditable = line.kind !== "refused" && !isClosedToTyping(line);
  const [asked, setAsked] = useState<Asked | null>(null);
  const [outline, setOutline] = useState<Outline>(EMPTY_OUTLINE);
  const [remembered, setRemembered] = useState<ReadonlyMap<string, CompoundItem>>(new Map());
  const announce = useAnnounce();
  const keys = useRef<SuggestKeys | null>(null);
  const toolbar = useRef<HTMLDivElement>(null);
  const picker = useRef<HTMLInputElement>(null);
  const takeFiles = useRef<(files: readonly File[]) => void>(() => undefined);

  const editor = useEditor(
    {
      immediatelyRender: false,
      // Its own style element would break the policy of the page; its rules are in globals.css.
      injectCSS: false,
      editable: isEditable,
      extensions: [
        Together.configure({ doc: provider.doc, awareness: provider.awareness }),
        ...extensionsOfPage(pageViews),
        Suggest.configure({ onKey: (event) => keys.current?.(event) ?? false }),
        Tidy.configure({ placeholder: "Write here. “/” puts something in, “@” a compound.", onRefusedPaste: announce }),
        TableKeys,
      ],
      editorProps: {
        attributes: {
          class: "written is-edited",
          role: "textbox",
          "aria-multiline": "true",
          "aria-label": "Page",
        },
        handlePaste: (_view, event) => hasFiles(event.clipboardData, takeFiles.current),
        handleDrop: (_view, event, _slice, isMoved) => !isMoved && hasFiles(event.dataTransfer, takeFiles.current),
      },
    },
    [provider],
  );

  const uploads = useUploads(
    revisionId,
    useCallback(
      (attachmentId: string) => {
        if (editor === null || editor.isDestroyed) return;
        insertAttachment(attachmentId)(editor.state, editor.view.dispatch);
        announce("The file is on the page.");
      },
      [editor, announce],
    ),
  );
  useEffect(() => {
    takeFiles.current = uploads.add;
  });
  useEffect(() => {
    if (editor !== null && editor.isEditable !== isEditable) editor.setEditable(isEditable, false);
  }, [editor, isEditable]);

  // How it stands with saving is said, once each, to those who do not see the counterfoil.
  const words = wordsOfStatus({ ...line, unsavedFields: 0 });
  const spoken = line.kind === "saving" ? "" : words;
  useEffect(() => {
    if (spoken !== "") announce(spoken);
  }, [spoken, announce]);

  useOutline(editor, provider, person.id, setOutline);
  useEffect(() => onOutline?.(outline), [outline, onOutline]);

  const ids = outline.compounds.map(({ compound }) => compound);
  const known = useQuery(compoundsByIdQuery(ids));
  const compounds = useMemo(() => new Map([...(known.data ?? []), ...remembered]), [known.data, remembered]);
  const client = useQueryClient();

  const context = useMemo<PageContextValue>(
    () => ({
      revisionId,
      decimalSign,
      timeZone,
      line,
      compounds,
      remember: (item) => setRemembered((before) => new Map(before).set(item.id, item)),
      askFormula: (request) => setAsked({ kind: "formula", request }),
    }),
    [revisionId, decimalSign, timeZone, line, compounds],
  );
  // Another line, another truth: what the server said while it was signed out is asked again.
  const isReached = line.kind === "saved" || line.kind === "saving";
  useEffect(() => {
    if (isReached)
      void client.invalidateQueries({ queryKey: ["compounds"], predicate: (query) => query.state.status === "error" });
  }, [isReached, client]);

  if (editor === null) return null;
  const asking: Asking = {
    formula: (request) => setAsked({ kind: "formula", request }),
    compound: ({ onDone }) =>
      setAsked({
        kind: "compound",
        request: {
          onDone: (item) => {
            context.remember(item);
            onDone(item);
          },
        },
      }),
    file: () => picker.current?.click(),
  };
  const askLink = () => {
    const href: unknown = editor.getAttributes("link").href;
    setAsked({
      kind: "link",
      request: {
        href: typeof href === "string" ? href : "",
        onDone: (address) => putLink(editor, address),
      },
    });
  };
  const close = () => setAsked(null);
  return (
    <PageProvider value={context}>
      <Refused
        revisionId={revisionId}
        line={line}
        wordsOfPage={() => editor.getText({ blockSeparator: "\n" })}
        onDiscard={provider.discardRefused}
      />
      <HeadFields doc={provider.doc} recordedAt={head.recordedAt} timeZone={timeZone} isEditable={isEditable} />
      {isEditable ? <PageToolbar editor={editor} asking={asking} onLink={askLink} toolbar={toolbar} /> : null}
      <EditorContent editor={editor} />
      <UploadList {...uploads} />
      {isEditable ? <SuggestList editor={editor} asking={asking} keys={keys} /> : null}
      <input
        ref={picker}
        type="file"
        multiple
        hidden
        aria-label="Files to attach"
        onChange={(event) => {
          uploads.add([...(event.target.files ?? [])]);
          event.target.value = "";
        }}
      />
      {asked?.kind === "link" ? <LinkDialog request={asked.request} onClose={close} /> : null}
      {asked?.kind === "formula" ? <FormulaDialog request={asked.request} onClose={close} /> : null}
      {asked?.kind === "compound" ? <CompoundDialog request={asked.request} onClose={close} /> : null}
    </PageProvider>
  );
}

type PageEditorInstance = NonNullable<ReturnType<typeof useEditor>>;

function useOutline(
  editor: PageEditorInstance | null,
  provider: Provider,
  ownId: string,
  onOutline: (outline: Outline) => void,
): void {
  useEffect(() => {
    if (editor === null) return;
    let timer: ReturnType<typeof setTimeout> | null = null;
    const read = () => {
      timer = null;
      if (!editor.isDestroyed) onOutline(outlineOf(editor.getJSON(), othersOn(provider.awareness, ownId)));
    };
    const later = () => {
      timer ??= setTimeout(read, OUTLINE_MS);
    };
    read();
    editor.on("update", later);
    provider.awareness.on("change", later);
    return () => {
      if (timer !== null) clearTimeout(timer);
      editor.off("update", later);
      provider.awareness.off("change", later);
    };
  }, [editor, provider, ownId, onOutline]);
}

/** Puts the link on what is chosen, or the address itself where nothing is; "" takes it out. */
function putLink(editor: PageEditorInstance, href: string): void {
  const chain = editor.chain().focus().extendMarkRange("link");
  if (href === "") chain.unsetLink().run();
  else if (editor.state.selection.empty && !editor.isActive("link")) {
    chain.insertContent({ type: "text", text: href, marks: [{ type: "link", attrs: { href } }] }).run();
  } else chain.setLink({ href }).run();
}

function hasFiles(transfer: DataTransfer | null, take: (files: readonly File[]) => void): boolean {
  const files = [...(transfer?.files ?? [])];
  if (files.length === 0) return false;
  take(files);
  return true;
}
