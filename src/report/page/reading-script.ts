/** The part of the page's script that reads values out, under the pointer and by the arrow keys. It stands inside the whole (`script.ts`). */
export const readingScript = `
/** What reads a drawing out: a place for marks in it, a place for words below it, and a name for the keyboard. */
function reader(tools, holder) {
  const svg = holder.querySelector("svg");
  const mark = document.createElementNS(svgName, "g");
  mark.setAttribute("class", "readout");
  svg.append(mark);
  const told = document.createElement("span");
  told.className = "told";
  told.setAttribute("role", "status");
  if (!hinted) {
    const hint = document.createElement("span");
    hint.className = "hint";
    hint.textContent = "Point at a figure, or focus it and use the arrow keys, to read values.";
    tools.append(hint);
  }
  hinted = true;
  tools.append(told);
  holder.tabIndex = 0;
  holder.setAttribute("role", "group");
  holder.setAttribute("aria-label", (svg.querySelector("title").textContent || "Curve") + ": arrow keys read the values");
  return { svg, mark, told };
}

/** Where the pointer is, in the px of a drawing. */
function spotIn(svg, e) {
  const matrix = svg.getScreenCTM();
  return matrix ? new DOMPoint(e.clientX, e.clientY).matrixTransform(matrix.inverse()) : undefined;
}

/** Lets pointer and arrow keys walk along the rows of a figure. */
function listed(tools, holder, data) {
  const { svg, mark, told } = reader(tools, holder);
  let at = -1;
  const show = (row) => {
    at = Math.min(data.boxes.length - 1, Math.max(0, row));
    const [x, y, width, height] = data.boxes[at];
    mark.replaceChildren(shape("path", { d: "M" + (x - 6) + " " + y + "v" + height, class: "curve" }));
    const [name, ...values] = data.rows[at];
    told.textContent = name + ": " + values.map((v, k) => data.head[k + 1] + " " + (typeof v === "number" ? say(v) : v)).join("; ");
  };
  const clear = () => {
    mark.replaceChildren();
    told.textContent = "";
    at = -1;
  };
  holder.addEventListener("pointermove", (e) => {
    const spot = spotIn(svg, e);
    const row = spot ? data.boxes.findIndex(([, y, , height]) => spot.y >= y && spot.y < y + height) : -1;
    if (row < 0) clear();
    else show(row);
  });
  holder.addEventListener("pointerleave", clear);
  holder.addEventListener("blur", clear);
  holder.addEventListener("keydown", (e) => {
    const to = { ArrowDown: at + 1, ArrowRight: at + 1, ArrowUp: at - 1, ArrowLeft: at - 1, Home: 0, End: data.boxes.length - 1 }[e.key];
    if (to !== undefined) show(to);
    else if (e.key === "Escape") clear();
    else return;
    e.preventDefault();
  });
}

/** Lets pointer and arrow keys walk along the curves of a figure. */
function readable(tools, holder, data) {
  const { svg, mark, told } = reader(tools, holder);
  let at = { plot: 0, point: -1 };

  const show = (plot, point) => {
    const p = data.plots[plot];
    const xs = data.numbers[p.series[0].x];
    at = { plot, point: Math.min(xs.length - 1, Math.max(0, point)) };
    const x = xs[at.point];
    if (x === null) return;
    const left = px(p.x, x, p.box[0], p.box[2]);
    mark.replaceChildren(shape("line", { x1: left, x2: left, y1: p.box[1], y2: p.box[1] + p.box[3], class: "leader" }));
    const values = [];
    for (const s of p.series) {
      const own = data.numbers[s.x];
      const k = own === xs ? at.point : nearest(own, x);
      const y = data.numbers[s.y][k];
      if (y === null || y === undefined) continue;
      values.push(s.label + " " + say(y));
      const up = px(p.y, y, 0, p.box[3]);
      if (up >= -1 && up <= p.box[3] + 1)
        mark.append(shape("circle", { cx: px(p.x, own[k], p.box[0], p.box[2]), cy: p.box[1] + p.box[3] - up, r: 3.5, class: "value" }));
    }
    const [quantity, unit] = parted(p.x.words);
    told.textContent = (p.label ? p.label + ", " : "") + quantity + " " + say(x) + " " + unit + ": " + values.join(", ") + " (" + p.y.words + ")";
  };
  const clear = () => {
    mark.replaceChildren();
    told.textContent = "";
    at = { plot: at.plot, point: -1 };
  };

  holder.addEventListener("pointermove", (e) => {
    const spot = spotIn(svg, e);
    if (!spot) return;
    const plot = data.plots.findIndex((p) => spot.x >= p.box[0] - 4 && spot.x <= p.box[0] + p.box[2] + 4 && spot.y >= p.box[1] - 10 && spot.y <= p.box[1] + p.box[3] + 90);
    if (plot < 0) return clear();
    const p = data.plots[plot];
    const share = Math.min(1, Math.max(0, (spot.x - p.box[0]) / p.box[2]));
    const x = p.x.log ? p.x.from * (p.x.to / p.x.from) ** share : p.x.from + share * (p.x.to - p.x.from);
    show(plot, nearest(data.numbers[p.series[0].x], x));
  });
  holder.addEventListener("pointerleave", clear);
  holder.addEventListener("blur", clear);
  holder.addEventListener("keydown", (e) => {
    const length = data.numbers[data.plots[at.plot].series[0].x].length;
    const far = Math.max(2, Math.round(length / 20));
    const to = { ArrowRight: at.point + 1, ArrowLeft: at.point < 0 ? length - 1 : at.point - 1, PageDown: at.point + far, PageUp: at.point - far, Home: 0, End: length - 1 }[e.key];
    if (to !== undefined) show(at.plot, to);
    else if (e.key === "ArrowDown" || e.key === "ArrowUp") {
      const step = e.key === "ArrowDown" ? 1 : data.plots.length - 1;
      show((at.plot + step) % data.plots.length, Math.max(0, at.point));
    } else if (e.key === "Escape") clear();
    else return;
    e.preventDefault();
  });
}

function parted(words) {
  const cut = words.lastIndexOf(", ");
  return cut < 0 ? [words, ""] : [words.slice(0, cut), words.slice(cut + 2)];
}

/** Where a value lies along an axis that begins at start and is so long. */
function px(axis, value, start, length) {
  const share = axis.log
    ? (Math.log(value) - Math.log(axis.from)) / (Math.log(axis.to) - Math.log(axis.from))
    : (value - axis.from) / (axis.to - axis.from);
  return start + share * length;
}

/** The index of the number nearest to x in a list that rises. */
function nearest(list, x) {
  let low = 0;
  let high = list.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (list[middle] <= x) low = middle;
    else high = middle;
  }
  return x - list[low] <= list[high] - x ? low : high;
}

function shape(kind, attributes) {
  const made = document.createElementNS(svgName, kind);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  return made;
}
`.trim();
