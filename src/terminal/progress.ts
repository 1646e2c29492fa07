import cliProgress from "cli-progress";
import { type Progress, silentProgress } from "../effects/effects.ts";
import { cut, pad, plain } from "./style.ts";

/** What progress needs of the stream it is drawn on. */
export type ProgressStream = NodeJS.WritableStream & { readonly isTTY?: boolean; readonly columns?: number };

/** Columns below which nothing is drawn. */
const NARROW = 40;

/** Columns for the label. */
const LABEL = 16;

/**
 * Progress with time left, drawn on `stream` if that is a terminal wide enough and no continuous-integration service
 * is at work (`ci`); otherwise nothing is written at all. One line, cleared when a stage is done; a stage that is
 * started while another is being drawn takes its place on the line, which the first gets back.
 */
export function terminalProgress(stream: ProgressStream, ci: boolean): Progress {
  if (ci || stream.isTTY !== true || !((stream.columns ?? 0) >= NARROW)) return silentProgress;
  const drawn: { bar: cliProgress.SingleBar; resume: () => void }[] = [];
  return {
    start: (label, total) => {
      drawn.at(-1)?.bar.stop();
      const bar = newBar(stream);
      const name = pad(cut(plain(label), LABEL), LABEL);
      let value = 0;
      let open = true;
      const resume = () => bar.start(Math.max(total, 1), value, { label: name });
      const layer = { bar, resume };
      drawn.push(layer);
      resume();
      return {
        tick: (n = 1) => {
          value = Math.min(total, value + n);
          if (open && drawn.at(-1) === layer) bar.update(value);
        },
        done: () => {
          if (!open) return;
          open = false;
          const top = drawn.at(-1) === layer;
          drawn.splice(drawn.indexOf(layer), 1);
          if (!top) return;
          bar.stop();
          drawn.at(-1)?.resume();
        },
      };
    },
  };
}

function newBar(stream: ProgressStream): cliProgress.SingleBar {
  return new cliProgress.SingleBar({
    stream,
    format: (_, { progress, eta }, { label }: { label: string }) =>
      progressText(label, progress, eta, stream.columns ?? NARROW),
    clearOnComplete: true,
    hideCursor: false,
    // Signals are the command line's business.
    gracefulExit: false,
    linewrap: null,
    fps: 8,
    etaBuffer: 50,
  });
}

/** One line: label, bar, share done, time left (`eta` in seconds; not said before anything is known). */
export function progressText(label: string, progress: number, eta: number, width: number): string {
  const share = `${String(Math.floor(progress * 100)).padStart(3)} %`;
  const left = Number.isFinite(eta) && progress > 0 && progress < 1 ? `${spanText(eta)} left` : "";
  const bar = Math.max(4, Math.min(30, width - LABEL - share.length - 18));
  const done = Math.floor(progress * bar);
  return cut(`${label} ${"■".repeat(done)}${"·".repeat(bar - done)} ${share}  ${left}`, width - 1).trimEnd();
}

/** A length of time in at most two units: `8 s`, `2 min 5 s`, `3 h 10 min`. */
export function spanText(seconds: number): string {
  const whole = Math.max(0, Math.round(seconds));
  const [h, min, s] = [Math.floor(whole / 3600), Math.floor(whole / 60) % 60, whole % 60];
  if (h > 0) return min > 0 ? `${h} h ${min} min` : `${h} h`;
  if (min > 0) return s > 0 ? `${min} min ${s} s` : `${min} min`;
  return `${s} s`;
}
