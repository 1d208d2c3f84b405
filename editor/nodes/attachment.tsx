"use client";
// A file on the page: picture or name, length, fingerprint, and a caption that is entered like any typed value.
import { useQuery } from "@tanstack/react-query";
import { type NodeViewProps, NodeViewWrapper } from "@tiptap/react";
import { attachmentQuery } from "../../components/query/attachments.ts";
import { Button } from "../../components/ui/button.tsx";
import { FieldError } from "../../components/ui/field-parts.tsx";
import { EnteredText } from "../entered-text.tsx";
import { FileFigure } from "../read/file-figure.tsx";

export function AttachmentView({ editor, node, updateAttributes, deleteNode, selected }: NodeViewProps) {
  const id = String(node.attrs.attachment);
  const caption = String(node.attrs.caption);
  const file = useQuery(attachmentQuery(id));
  return (
    <NodeViewWrapper className="file-view" contentEditable={false} data-selected={selected}>
      <FileFigure id={id} file={file.data ?? null} caption={editor.isEditable ? "" : caption} />
      {file.isError ? <FieldError>The file cannot be read at the moment: {file.error.message}</FieldError> : null}
      {editor.isEditable ? (
        <div className="row-of">
          <EnteredText
            field={`file ${id} caption`}
            label="Caption"
            value={caption}
            most={500}
            onEnter={(text) => updateAttributes({ caption: text })}
          />
          <Button kind="quiet" onClick={() => deleteNode()}>
            Take off the page
          </Button>
        </div>
      ) : null}
    </NodeViewWrapper>
  );
}
