/** One lane's plot: uPlot for scales, axes and lines; marks and bands are drawn over and under them. */
import type { JSX } from "preact";
import { useLayoutEffect, useRef } from "preact/hooks";
import { effect } from "@preact/signals";
import uPlot from "uplot";
import "uplot/dist/uPlot.min.css";
import { look } from "../state/prefs";
import { view } from "../state/view";
import { GUTTER, MARGIN, tickTexts } from "./axis";
import { ink, plotFont } from "./ink";
import type { Surface } from "./surface";

/** Height kept free for the lane's caption, so that it never covers a point. */
const CAPTION = 22;

/** One line of a lane. */
export interface Trace {
  values: ArrayLike<number | null>;
  colour: string;
  width: number;
  dash: number[];
}

/** What a lane draws. */
export interface Drawing {
  /** Energies of the traces, GeV. */
  w: ArrayLike<number>;
  traces: Trace[];
  /** Range of values shown. */
  low: number;
  high: number;
  under?: (plot: Surface) => void;
  over?: (plot: Surface) => void;
}

interface ChartProps {
  height: number;
  /** Whether this lane carries the tick labels of the energy axis. */
  labelled: boolean;
  /** Reads signals; called again whenever one of them changes. */
  draw: () => Drawing;
}

/** The canvas of one lane. */
export function Chart({ height, labelled, draw }: ChartProps): JSX.Element {
  const box = useRef<HTMLDivElement>(null);
  const high = useRef(height);
  const resize = useRef<() => void>();

  useLayoutEffect(() => {
    high.current = height;
    resize.current?.();
  }, [height]);

  useLayoutEffect(() => {
    const host = box.current;
    if (host === null) return;
    let plot: uPlot | null = null;
    let drawing: Drawing | null = null;
    let shape = "";
    let frame = 0;

    const build = (): void => {
      if (drawing === null || host.clientWidth < 80) return;
      plot?.destroy();
      plot = new uPlot(options(host.clientWidth, high.current, labelled, () => drawing), data(drawing), host);
    };
    const commit = (): void => {
      frame = 0;
      if (drawing === null) return;
      const now = drawing.traces.map((trace) => `${trace.colour}${trace.width}${trace.dash.join()}`).join();
      if (plot === null || now !== shape) {
        shape = now;
        build();
      } else plot.setData(data(drawing), true);
    };
    const stop = effect(() => {
      void view.value;
      void look.value;
      drawing = draw();
      if (frame === 0) frame = requestAnimationFrame(commit);
    });
    resize.current = () => {
      if (plot === null) build();
      else if (plot.width !== host.clientWidth || plot.height !== high.current) plot.setSize({ width: host.clientWidth, height: high.current });
    };
    const resized = new ResizeObserver(resize.current);
    resized.observe(host);
    return () => {
      stop();
      resize.current = undefined;
      resized.disconnect();
      cancelAnimationFrame(frame);
      plot?.destroy();
    };
  }, [labelled, draw]);

  return <div class={labelled ? "chart chart-labelled" : "chart"} ref={box} aria-hidden="true" />;
}

function data(drawing: Drawing): uPlot.AlignedData {
  return [drawing.w, ...drawing.traces.map((trace) => trace.values)] as uPlot.AlignedData;
}

function options(width: number, height: number, labelled: boolean, now: () => Drawing | null): uPlot.Options {
  const axis = {
    stroke: (plot: uPlot) => ink("--ink-2", plot.root),
    grid: { stroke: (plot: uPlot) => ink("--c-grid", plot.root), width: 1 },
    ticks: { stroke: (plot: uPlot) => ink("--edge", plot.root), width: 1, size: 4 },
    border: { show: true, stroke: (plot: uPlot) => ink("--edge", plot.root), width: 1 },
    font: plotFont(),
  };
  return {
    width,
    height,
    padding: [CAPTION, MARGIN, labelled ? 0 : 6, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: { time: false, range: () => [view.peek().from, view.peek().to] },
      y: { range: () => [now()?.low ?? 0, now()?.high ?? 1] },
    },
    axes: [
      {
        ...axis,
        size: labelled ? 26 : 0,
        gap: 3,
        space: 88,
        ticks: { ...axis.ticks, show: labelled },
        values: (_plot, splits) => (labelled ? tickTexts(splits, view.peek()) : splits.map(() => "")),
      },
      { ...axis, size: GUTTER, gap: 4, space: (plot) => (plot.height > 350 ? 48 : 30), values: (_plot, splits) => splits.map(plain) },
    ],
    series: [
      {},
      ...(now()?.traces ?? []).map((trace) => ({
        stroke: (plot: uPlot) => ink(trace.colour, plot.root),
        width: trace.width,
        dash: trace.dash,
        points: { show: false },
      })),
    ],
    hooks: {
      drawClear: [(plot) => now()?.under?.(plot)],
      draw: [
        (plot) => {
          now()?.over?.(plot);
          if ((now()?.w.length ?? 0) > 1) drawn();
        },
      ],
    },
  };
}

let before = false;

/** The moments from which there is something (new) to look at: read by the benchmark. */
function drawn(): void {
  if (!before) performance.mark("first-plot");
  before = true;
  performance.clearMarks("curve-drawn");
  performance.mark("curve-drawn");
}

function plain(value: number): string {
  return String(Number(value.toPrecision(6))).replace("-", "−");
}
