// The page: messages go from the socket to the parts.

import * as charts from "./charts.js";
import * as choices from "./choices.js";
import * as events from "./events.js";
import * as findings from "./findings.js";
import * as finish from "./finish.js";
import * as freshness from "./freshness.js";
import * as levels from "./levels.js";
import * as setup from "./setup.js";
import * as verdict from "./verdict.js";
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

const heard = {
  describe(message) {
    if (described !== null && described.run !== message.run) {
      location.reload(); // another run: nothing that is shown belongs to it
      return;
    }
    if (described === null) {
      described = message;
      put(document.getElementById("title"), message.title || "Untitled run");
      const tag = document.getElementById("kind");
      tag.dataset.kind = message.kind;
      put(tag, kinds[message.kind] ?? message.kind);
      levels.build(message.channels);
      choices.build(message, (request) => socket.send(request));
      events.build(choices.look);
      finish.build(() => socket.send({ type: "finish" }));
      if (!message.saves) {
        finish.savesNothing();
      }
      setup.build((stage) => socket.send({ type: "measure", stage }));
      charts.build(message, choices.look);
    }
    socket.send({ type: "events", after: events.last() });
    choices.again();
  },
  refresh(message) {
    verdict.show(message.status, lag(message.status));
    choices.shown(message.view, described.spacing_hz);
    charts.take(message);
  },
  levels(message) {
    heardS = message.time_s;
    put(document.getElementById("clock"), message.time_s === null ? "" : `source time ${message.time_s.toFixed(1)} s`);
    levels.take(message);
  },
  events: events.add,
  setup(message) {
    document.documentElement.dataset.mode = "setup";
    finish.ofSetup();
    findings.stages(message.stages);
    setup.take(message);
  },
  findings: findings.take,
  run(message) {
    setup.finishing(message.finishing);
    if (finish.take(message)) {
      freshness.end();
      verdict.end();
    }
  },
};

// lag is how far the estimates are behind the levels, in seconds, as far as it is more than blocks
// explain; else 0.
function lag(status) {
  const behind = heardS - status.time_s;
  return behind > 3 + 3 * described.block_s ? behind : 0;
}

const socket = connect(
  (message) => heard[message.type]?.(message),
  (link) => {
    finish.link(link.open);
    const age = freshness.told(link);
    verdict.age(age);
    setup.link(link.open, age !== null);
    document.title = `${setup.title() ?? verdict.title()} · ${described?.title || "shakerwatch"}`;
  },
);
