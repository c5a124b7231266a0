/** Reading a series of codes, by camera or from photographs of them. */
import type { JSX } from "preact";
import { useSignal } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import decodeQR from "qr/decode.js";
import { openText, sheetInLink } from "../state/files";
import { Unreadable } from "./pack";
import { collect, missing, textOf, type Collected } from "./series";

/** Longest side of a picture when it is searched for a code. */
const SIDE = 1280;

/** The panel. */
export function ReadCodes(): JSX.Element {
  const got = useSignal<Collected | null>(null);
  const told = useSignal("");
  const filming = useSignal(false);
  const video = useRef<HTMLVideoElement>(null);
  const stop = (): void => {
    for (const track of (video.current?.srcObject as MediaStream | null)?.getTracks() ?? []) track.stop();
    filming.value = false;
  };
  useEffect(() => stop, []);

  const open = async (text: string): Promise<void> => {
    stop();
    const wrong = await openText(text, "read a sheet from codes");
    told.value = wrong === "" ? "Read and opened. Undo brings the sheet before it back." : `Not opened: ${wrong}`;
    got.value = null;
  };
  const take = async (code: string): Promise<void> => {
    try {
      const linked = code.includes("#sheet=") ? sheetInLink(code.slice(code.indexOf("#"))) : null;
      if (linked !== null) return await open(linked);
      const next = collect(got.value, code);
      got.value = next;
      const open_ = missing(next);
      if (open_.length === 0) return await open(textOf(next));
      told.value = `${next.count - open_.length} of ${next.count} read; still to read: ${open_.join(", ")}.`;
    } catch (reason) {
      told.value = reason instanceof Unreadable ? `Not read: ${reason.message}.` : String(reason);
    }
  };
  const photographs = async (files: FileList | null): Promise<void> => {
    for (const file of files ?? []) {
      const code = await createImageBitmap(file).then(
        (image) => find(image, image.width, image.height, true),
        () => null,
      );
      if (code === null) told.value = `No code found in ${file.name}. Hold the camera straight and close, without glare.`;
      else await take(code);
    }
  };
  const film = async (): Promise<void> => {
    try {
      const stream = await navigator.mediaDevices.getUserMedia({ video: { facingMode: "environment" }, audio: false });
      filming.value = true;
      told.value = "Hold the codes before the camera.";
      requestAnimationFrame(() => {
        if (video.current === null) return;
        video.current.srcObject = stream;
        void video.current.play();
        look();
      });
    } catch {
      told.value = "The camera is not to be had here. Photograph the codes and give the pictures instead.";
    }
  };
  const look = (): void => {
    const eye = video.current;
    if (eye === null || !filming.peek()) return;
    const code = eye.videoWidth > 0 ? find(eye, eye.videoWidth, eye.videoHeight, false) : null;
    void (code === null ? Promise.resolve() : take(code)).then(() => setTimeout(look, 120));
  };

  return (
    <div class="codes">
      <div class="buttons">
        {navigator.mediaDevices !== undefined && (
          <button type="button" class="button" onClick={() => (filming.value ? stop() : void film())}>
            {filming.value ? "Stop the camera" : "Read codes with the camera"}
          </button>
        )}
        <label class="button">
          Read codes from photographs
          <input
            class="unseen"
            type="file"
            accept="image/*"
            multiple
            data-test="code-photographs"
            onChange={(event) => {
              const { files } = event.currentTarget;
              void photographs(files);
            }}
          />
        </label>
      </div>
      {filming.value && <video ref={video} class="viewfinder" muted playsInline aria-label="Camera" />}
      <p class="told" role="status">
        {told.value}
      </p>
    </div>
  );
}

/** The code in a picture, or null. A still picture may take longer than a frame of a film. */
function find(picture: CanvasImageSource, width: number, height: number, still: boolean): string | null {
  const scale = Math.min(1, SIDE / Math.max(width, height));
  const canvas = document.createElement("canvas");
  canvas.width = Math.max(1, Math.round(width * scale));
  canvas.height = Math.max(1, Math.round(height * scale));
  const ink = canvas.getContext("2d", { willReadFrequently: true });
  if (ink === null) return null;
  ink.drawImage(picture, 0, 0, canvas.width, canvas.height);
  try {
    return decodeQR(ink.getImageData(0, 0, canvas.width, canvas.height), still ? { effort: Infinity, timeLimit: 2000 } : { timeLimit: 30 });
  } catch {
    return null;
  }
}
