// The page: messages go from the socket to the parts.

import * as charts from "./charts.js";
import * as choices from "./choices.js";
import * as controls from "./controls.js";
import * as demo from "./demo.js";
import * as events from "./events.js";
import * as findings from "./findings.js";
import * as finish from "./finish.js";
import * as freshness from "./freshness.js";
import * as keys from "./keys.js";
import * as levels from "./levels.js";
import * as marks from "./marks.js";
import * as news from "./news.js";
import * as setup from "./setup.js";
import * as sketch from "./sketch.js";
import * as verdict from "./verdict.js";
import * as wall from "./wall.js";
import { put } from "./format.js";
import { connect } from "./socket.js";

const kinds = {
  demo: "SIMULATED: no real shaker",
  recording: "REPLAY of a recording",
  soundcard: "LIVE from the sound device",
  pipe: "LIVE from a pipe",
};

let described = null;
let heardS = null; // source seconds of the newest levels
let refreshed = 0; // number of the newest refresh

// heard takes a message of each type. It returns true when it brings news of the run: what was sent before, and
// comes again on a new connection, does not show that the run goes on.
const heard = {
  describe(message) {
    if (described !== null && described.run !== message.run) {
      location.reload(); // another run: nothing that is shown belongs to it
      return;
    }
    if (described === null) {
      described = message;
      build();
    }
    socket.send({ type: "events", after: events.last() });
    choices.again();
  },
  access({ control }) {
    for (const part of [controls, demo, events, levels, news]) {
      part.control(control);
    }
    finish.control(control);
    setup.control(control);
  },
  refresh(message) {
    const isNew = message.number !== refreshed;
    refreshed = message.number;
    verdict.show(message.status, lag(message.status));
    controls.paused(message.status.paused);
    choices.shown(message.view, described.spacing_hz, message.curves["ranking.error"]);
    sketch.follow(message.view.response, described.forces);
    charts.take(message);
    return isNew;
  },
  levels(message) {
    const isNew = message.time_s !== heardS;
    heardS = message.time_s;
    put(document.getElementById("clock"), message.time_s === null ? "" : `source time ${message.time_s.toFixed(1)} s`);
    levels.take(message);
    sketch.mark(false);
    return isNew;
  },
  held: levels.takeHeld,
  marks(message) {
    marks.take(message);
    charts.flag(message.standing);
    levels.marked();
    sketch.mark(true);
    wall.marked();
  },
  events: events.add,
  acknowledged: events.acknowledged,
  asked: (message) => controls.show(message, demo.nameOf),
  broken: demo.take,
  refused: controls.refused,
  setup(message) {
    document.documentElement.dataset.mode = "setup";
    controls.end();
    finish.ofSetup();
    findings.stages(message.stages);
    setup.take(message);
    return true;
  },
  findings: findings.take,
  run(message) {
    setup.finishing(message.finishing);
    if (message.finishing || message.ended !== null) {
      controls.end();
    }
    if (finish.take(message)) {
      freshness.end();
      verdict.end();
    }
  },
};

// build makes all parts for the run that was described.
function build() {
  const { title, kind, channels, saves, forces } = described;
  const send = (request) => socket.send(request);
  const choose = (channel) => choices.choose(channel < forces ? { force: channel } : { response: channel - forces });
  const does = {
    showBand: choices.look,
    acknowledge: (event, before) => send({ type: "acknowledge", event, before }),
  };
  put(document.getElementById("title"), title || "Untitled run");
  document.getElementById("title").title = title;
  const tag = document.getElementById("kind");
  tag.dataset.kind = kind;
  put(tag, kinds[kind] ?? kind);
  marks.build(described);
  levels.build(channels, (channel) => send({ type: "reset-peaks", channel }), choose);
  sketch.build(described, choose);
  choices.build(described, send);
  news.build(does);
  events.build(does, news.draw);
  controls.build(described, send);
  demo.build(described, send);
  finish.build(() => send({ type: "finish" }));
  if (!saves) {
    finish.savesNothing();
  }
  setup.build((stage) => send({ type: "measure", stage }));
  charts.build(described);
  wall.build();
  keys.build([
    ["P", "pauses averaging, or resumes it", keys.click("pause")],
    ["S", "starts the average over; asks first", keys.click("start-over")],
    ["N", "writes a note into the list of events", keys.click("note")],
    ["F", "finishes and saves; asks first", keys.click("finish")],
    ["A", "acknowledges the event in the band", news.acknowledge],
    ["E", "goes to the list of events", () => document.getElementById("log").focus()],
    ["H", "holds the peaks of the channels, or not", levels.holdOrNot],
    ["R", "resets the held peaks, on all pages", keys.click("reset")],
    ["V", "turns the structure to another side", sketch.next],
    ...charts.keys,
    ["/", "looks for a channel", () => document.getElementById("search").focus()],
    ["W", "wall screen: the verdict and one plot, readable from three metres", wall.toggle],
  ]);
}

// lag is how far the estimates are behind the levels, in seconds, as far as it is more than blocks
// explain; else 0.
function lag(status) {
  const behind = heardS - status.time_s;
  return behind > 3 + 3 * described.block_s ? behind : 0;
}

const socket = connect(
  (message) => heard[message.type]?.(message) === true,
  (link) => {
    finish.link(link.open);
    controls.link(link.open);
    demo.link(link.open);
    const age = freshness.told(link);
    verdict.age(age);
    setup.link(link.open, age !== null);
    document.title = `${setup.title() ?? verdict.title()} · ${described?.title || "shakerwatch"}`;
  },
);
