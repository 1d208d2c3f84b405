// A file as it stands on a page, for the editor and for signed pages alike.
import { formatBytes } from "../../components/format.ts";
import { Fingerprint } from "../../components/leaf/fingerprint.tsx";
import { type AttachmentMeta, attachmentPath } from "../../components/query/attachments.ts";

type FileFigureProps = {
  id: string;
  /** null: not known yet, or not to be read */
  file: AttachmentMeta | null;
  caption: string;
  /** struck off the record of this revision, with the reason */
  struck?: string;
};

export function FileFigure({ id, file, caption, struck }: FileFigureProps) {
  if (file === null) {
    return (
      <figure className="file">
        <span className="name">File {id}</span>
      </figure>
    );
  }
  return (
    <figure className="file">
      {file.isPicture ? (
        // biome-ignore lint/performance/noImgElement: an attachment is shown byte for byte, never re-encoded
        <img src={attachmentPath(id)} alt={caption === "" ? file.name : caption} />
      ) : null}
      <a className={struck === undefined ? "name" : "name struck"} href={attachmentPath(id)} download={file.name}>
        {file.name}
      </a>
      <span className="figs">{formatBytes(file.size)}</span>
      {file.sha256 === "" ? null : <Fingerprint hex={file.sha256} label={`SHA-256 of ${file.name}`} />}
      {caption === "" ? null : <figcaption>{caption}</figcaption>}
      {struck === undefined ? null : <p className="note">Struck: {struck}</p>}
    </figure>
  );
}
