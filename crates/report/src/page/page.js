// Cursors and zoom for the plots of a report. Without it every plot is still there.
"use strict";
(() => {
  const SVG = "http://www.w3.org/2000/svg";
  const PREFIXES = { "-15": "f", "-12": "p", "-9": "n", "-6": "µ", "-3": "m", "0": "", "3": "k", "6": "M", "9": "G", "12": "T" };

  const add = (parent, name, attributes, text) => {
    const made = document.createElementNS(SVG, name);
    for (const key in attributes) made.setAttribute(key, attributes[key]);
    if (text !== undefined) made.textContent = text;
    parent.appendChild(made);
    return made;
  };
  const html = (parent, name, text) => {
    const made = document.createElement(name);
    if (text !== undefined) made.textContent = text;
    parent.appendChild(made);
    return made;
  };

  // A value to six digits with a prefixed unit and a true minus.
  const said = (value, unit) => {
    if (!Number.isFinite(value)) return "";
    if (value === 0) return ("0 " + unit).trim();
    const size = Number(Math.abs(value).toPrecision(6));
    let power = 3 * Math.floor(Math.log10(size) / 3);
    if (!/^(V|A|s|W|J|C|Wb|Ω)/.test(unit) || /^.[²^]/.test(unit) || !(power in PREFIXES)) power = 0;
    let digits = (size / 10 ** power).toPrecision(6);
    if (digits.includes(".") && !digits.includes("e")) digits = digits.replace(/\.?0+$/, "");
    return ((value < 0 ? "−" : "") + digits + " " + PREFIXES[power] + unit).trim();
  };

  // A channel's value to a hundred-thousandth of its largest: the curve is that of one mesh, and holds
  // no more than that for sure.
  const read_off = (channel, value) => {
    const place = 10 ** Math.ceil(Math.log10(channel.largest) - 5);
    return channel.largest > 0 && Number.isFinite(value) ? Math.round(value / place) * place : value;
  };

  // The cubic through the points about an instant; after a jump where it is one.
  const at = (channel, time) => {
    const { t, v, s } = channel;
    let low = 0;
    let high = t.length - 1;
    if (!(time >= t[0] && time <= t[high])) return NaN;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (t[middle] <= time) low = middle; else high = middle;
    }
    const h = t[high] - t[low];
    if (time >= t[high] || h <= 0) return v[high];
    const x = (time - t[low]) / h;
    const y = 1 - x;
    return v[low] * y * y * (1 + 2 * x) + v[high] * x * x * (3 - 2 * x) + h * x * y * (s[low] * y - s[high] * x);
  };

  const step = (span, count) => {
    const raw = span / count;
    const power = 10 ** Math.floor(Math.log10(raw));
    const share = raw / power;
    return power * (share <= 1 ? 1 : share <= 2 ? 2 : share <= 5 ? 5 : 10);
  };

  const enliven = (figure) => {
    const data = JSON.parse(figure.querySelector("script").textContent);
    if (!data.panels.length) return;
    for (const channel of data.channels) channel.largest = channel.v.reduce((m, v) => Math.max(m, Math.abs(v)), 0);
    const svg = figure.querySelector("svg");
    const screen = figure.querySelector(".screen");
    const name = figure.querySelector("figcaption").textContent;
    const [left, right] = data.across;
    const top = data.panels[0][0];
    const bottom = data.panels[data.panels.length - 1][1];
    let [from, to] = [data.from, data.to];
    let a = null;
    let b = null;
    const X = (time) => left + (right - left) * (time - from) / (to - from);
    const T = (x) => Math.min(to, Math.max(from, from + (to - from) * (x - left) / (right - left)));
    const whole = () => from === data.from && to === data.to;

    const layer = add(svg, "g", { "aria-hidden": "true" });
    const marks = add(svg, "g", { "aria-hidden": "true" });

    const redraw = () => {
      layer.textContent = "";
      svg.classList.toggle("zoomed", !whole());
      if (!whole()) picture();
      cursors();
    };

    // The part of the span in place of the whole: curves, ticks, events, crests.
    const picture = () => {
      const every = step(to - from, 8);
      const power = Math.max(-15, Math.min(12, 3 * Math.floor(Math.log10(Math.max(Math.abs(from), Math.abs(to))) / 3)));
      const places = Math.max(0, Math.min(12, Math.ceil(-Math.log10(every / 10 ** power) - 1e-9)));
      for (let k = Math.ceil(from / every - 1e-9); k * every <= to * (1 + 1e-12); k++) {
        const x = X(k * every);
        for (const [pt, pb] of data.panels) add(layer, "line", { class: "grid", x1: x, x2: x, y1: pt, y2: pb });
        add(layer, "line", { class: "tick", x1: x, x2: x, y1: bottom, y2: bottom + 6 });
        add(layer, "text", { class: "mid", x, y: bottom + 18 }, (k * every / 10 ** power).toFixed(places).replace("-", "−"));
      }
      add(layer, "text", { class: "mid", x: (left + right) / 2, y: bottom + 34 }, "time (" + PREFIXES[power] + "s)");
      // Names of events in rows above the panels, those of one instant together; what has no room has no name.
      const instants = new Map();
      for (const [time, words] of data.events) {
        if (time >= from && time <= to) instants.set(time, (instants.has(time) ? instants.get(time) + ", " : "") + words);
      }
      const rows = Array(Math.max(1, Math.floor((top - 26) / 14))).fill(-Infinity);
      for (const [time, words] of instants) {
        const x = X(time);
        const wide = 5.8 * words.length;
        const start = Math.min(Math.max(x - wide / 2, left - 20), right - wide);
        const row = rows.findIndex((end) => end + 8 < start);
        add(layer, "line", { class: "event", x1: x, x2: x, y1: top - 20, y2: bottom });
        if (row < 0) continue;
        rows[row] = start + wide;
        add(layer, "text", { class: "soft halo", x: start, y: top - 24 - 14 * row }, words);
      }
      for (const channel of data.channels) {
        const [pt, pb, low, high] = data.panels[channel.panel];
        const Y = (value) => Math.min(pb, Math.max(pt, pb - (pb - pt) * (value - low) / (high - low)));
        const points = [];
        const put = (time, value) => points.push(X(time).toFixed(2) + " " + Y(value).toFixed(2));
        const times = [];
        for (let k = 0; k <= 1356; k++) times.push(from + (to - from) * k / 1356);
        let next = channel.t.findIndex((t) => t > from);
        for (const time of times) {
          while (next > 0 && next < channel.t.length && channel.t[next] <= time) put(channel.t[next], channel.v[next++]);
          put(time, at(channel, time));
        }
        add(layer, "path", { class: "curve k" + channel.look, d: "M" + points.join("L") });
        if (channel.crest && channel.crest[0] >= from && channel.crest[0] <= to) {
          const [time, value] = channel.crest;
          add(layer, "circle", { class: "mark k" + channel.look, cx: X(time), cy: Y(value), r: 3.2 });
          add(layer, "text", { class: "halo", x: Math.min(X(time) + 7, right - 140), y: Math.max(pt + 12, Y(value) - 6) },
            said(value, channel.unit) + " at " + said(time, "s"));
        }
      }
    };

    const cursors = () => {
      marks.textContent = "";
      for (const [time, kind] of [[a, "a"], [b, "b"]]) {
        if (time === null || time < from || time > to) continue;
        const x = X(time);
        add(marks, "line", { class: "cursor " + kind, x1: x, x2: x, y1: top, y2: bottom });
        add(marks, "text", { class: "halo", x: x + 4, y: top + 12 }, kind.toUpperCase());
        for (const channel of data.channels) {
          const [pt, pb, low, high] = data.panels[channel.panel];
          const y = pb - (pb - pt) * (at(channel, time) - low) / (high - low);
          if (y >= pt && y <= pb) add(marks, "circle", { class: "mark k" + channel.look, cx: x, cy: y, r: 2.6 });
        }
      }
      read();
    };

    const tools = html(figure, "div");
    tools.className = "tools";
    const table = html(figure, "table");
    table.className = "reads";
    table.hidden = true;
    // Said once, before the first plot.
    const hint = "Point or use the arrow keys for cursor A (with Shift in larger steps), click or press B for cursor B, " +
      "drag or press + and − to zoom, E and C for the next event and crest, 0 for the whole span.";
    if (!document.querySelector(".hint")) {
      const said_once = document.createElement("p");
      said_once.className = "hint";
      said_once.textContent = hint;
      figure.before(said_once);
    }

    const read = () => {
      table.hidden = a === null && b === null;
      table.textContent = "";
      html(table, "caption", "Cursors on " + name);
      const head = html(html(table, "thead"), "tr");
      for (const word of ["", "A", "B", "B − A"]) html(head, "th", word).scope = "col";
      const body = html(table, "tbody");
      const row = (label, x, y, unit) => {
        const line = html(body, "tr");
        html(line, "th", label).scope = "row";
        html(line, "td", said(x, unit));
        html(line, "td", said(y, unit));
        html(line, "td", said(y - x, unit));
      };
      const one = (time) => (time === null ? NaN : time);
      row("time", one(a), one(b), "s");
      const values = [];
      for (const channel of data.channels) {
        const [x, y] = [a, b].map((time) => read_off(channel, at(channel, one(time))));
        row(channel.name, x, y, channel.unit);
        values.push(channel.name + " " + said(x, channel.unit));
      }
      screen.setAttribute("aria-valuenow", one(a) || 0);
      screen.setAttribute("aria-valuetext", a === null ? "no cursor" : [said(a, "s")].concat(values).join(", "));
    };

    const zoom = (start, end) => {
      const least = (data.to - data.from) * 1e-9;
      [from, to] = [Math.max(data.from, start), Math.min(data.to, end)];
      if (to - from < least) to = Math.min(data.to, from + least);
      redraw();
    };
    const about = (factor) => {
      const middle = a === null || a < from || a > to ? (from + to) / 2 : a;
      zoom(middle - (middle - from) * factor, middle + (to - middle) * factor);
    };
    const go = (times) => {
      const sorted = times.slice().sort((x, y) => x - y);
      const next = sorted.find((t) => a === null || t > a);
      if (!sorted.length) return;
      a = next === undefined ? sorted[0] : next;
      if (a < from || a > to) zoom(a - (to - from) / 2, a + (to - from) / 2);
      cursors();
    };
    const actions = {
      second: () => { b = a === null ? (from + to) / 2 : a; cursors(); },
      between: () => { if (a !== null && b !== null && a !== b) zoom(Math.min(a, b), Math.max(a, b)); },
      closer: () => about(0.5),
      wider: () => about(2),
      all: () => zoom(data.from, data.to),
      event: () => go(data.events.map((e) => e[0])),
      crest: () => go(data.channels.filter((c) => c.crest).map((c) => c.crest[0])),
      none: () => { a = b = null; cursors(); },
    };
    for (const [words, action] of [["set B here", "second"], ["zoom from A to B", "between"], ["closer", "closer"],
      ["wider", "wider"], ["whole span", "all"], ["next event", "event"], ["next crest", "crest"], ["no cursors", "none"]]) {
      const button = html(tools, "button", words);
      button.type = "button";
      button.addEventListener("click", actions[action]);
    }

    screen.tabIndex = 0;
    screen.setAttribute("role", "slider");
    screen.setAttribute("aria-label", "Cursor A on " + name);
    screen.setAttribute("aria-valuemin", data.from);
    screen.setAttribute("aria-valuemax", data.to);
    const keys = { b: "second", B: "second", "+": "closer", "=": "closer", "-": "wider", "0": "all", e: "event", c: "crest", Escape: "none" };
    screen.addEventListener("keydown", (press) => {
      if (press.ctrlKey || press.metaKey || press.altKey) return;
      const way = { ArrowLeft: -1, ArrowRight: 1, ArrowDown: -1, ArrowUp: 1 }[press.key];
      if (way) {
        const pixels = press.shiftKey ? 25 : 1;
        a = a === null ? from : Math.min(data.to, Math.max(data.from, a + way * pixels * (to - from) / (right - left)));
        cursors();
      } else if (press.key === "Home" || press.key === "End") {
        a = press.key === "Home" ? from : to;
        cursors();
      } else if (press.key in keys) {
        actions[keys[press.key]]();
      } else return;
      press.preventDefault();
    });

    const x_of = (event) => {
      const box = svg.getBoundingClientRect();
      return (event.clientX - box.left) * svg.viewBox.baseVal.width / box.width;
    };
    let drag = null;
    let pick = null;
    svg.addEventListener("pointerdown", (event) => { if (event.button === 0) drag = x_of(event); });
    svg.addEventListener("pointermove", (event) => {
      const x = x_of(event);
      a = T(x);
      cursors();
      if (drag !== null && Math.abs(x - drag) > 4) {
        const [l, r] = [Math.max(left, Math.min(drag, x)), Math.min(right, Math.max(drag, x))];
        pick = add(marks, "rect", { class: "pick", x: l, y: top, width: Math.max(0, r - l), height: bottom - top });
      }
    });
    svg.addEventListener("pointerup", (event) => {
      const x = x_of(event);
      if (drag !== null && pick && Math.abs(x - drag) > 4) {
        const ends = [T(drag), T(x)].sort((p, q) => p - q);
        zoom(ends[0], ends[1]);
      } else if (drag !== null) {
        b = T(x);
        cursors();
      }
      drag = pick = null;
    });
    svg.addEventListener("dblclick", actions.all);
  };

  for (const figure of document.querySelectorAll("figure.plot")) enliven(figure);
})();
