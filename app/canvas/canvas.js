// The drawing surface of one sheet. What it is sent and what it tells: the table at the top of canvas.py.
// Sections: numbers, view, painting (canvas), shapes (svg), hand (gestures), keys, line (messages), the component.

// --- numbers -------------------------------------------------------------------------------------------------

const MARGIN = {left: 64, right: 106, top: 38, bottom: 58}
const FOOT = 26
const SNAP_PX = 7
const LEAST_MM = 0.1
const NEW_MM = 10
const NAMED_OUTSIDE = 60
const MOST_DROPPED = 5_000_000
const PATIENCE_MS = 4000
const HANDLES = {nw: [0, 1], n: [.5, 1], ne: [1, 1], e: [1, .5], se: [1, 0], s: [.5, 0], sw: [0, 0], w: [0, .5]}
const CURSOR = {nw: "nwse", se: "nwse", ne: "nesw", sw: "nesw", n: "ns", s: "ns", e: "ew", w: "ew"}
const VERDICT = {pass: "✓", warn: "!", fail: "✕", "no-limits": ""}
const WORD = {pass: "within its limit", warn: "near its limit", fail: "over its limit", "no-limits": "without a limit"}

// What has changed since the last frame, from the cheapest to draw to the dearest: only what the hand moves; any shape;
// also the field, the view or the colours, which are painted under the shapes.
const [MOVED, SHAPES, PAPER] = [1, 2, 3]

const key = (thing) => `${thing.kind}:${thing.id}`
const clamp = (value, low, high) => Math.min(Math.max(value, low), high)
const mm = (value) => Math.round(value * 1e6) / 1e6

function roundStep(least) {
  const power = 10 ** Math.floor(Math.log10(least))
  return power * [1, 2, 5, 10].find((n) => n * power >= least)
}

function svg(tag, attributes = {}, ...children) {
  const node = document.createElementNS("http://www.w3.org/2000/svg", tag)
  set(node, attributes)
  node.append(...children)
  return node
}

function set(node, attributes) {
  for (const [name, value] of Object.entries(attributes)) {
    const text = String(value)
    if (node.getAttribute(name) !== text) node.setAttribute(name, text)
  }
}

// --- view: mm to px and back --------------------------------------------------------------------------------

class View {
  x_mm = 50; y_mm = 40; mm_per_px = .2; width = 600; height = 400; fitted = true
  plate = {width_mm: 100, height_mm: 80}

  get middle() {
    return [(MARGIN.left + this.width - MARGIN.right) / 2, (MARGIN.top + this.height - MARGIN.bottom) / 2]
  }
  X(x) { return this.middle[0] + (x - this.x_mm) / this.mm_per_px }
  Y(y) { return this.middle[1] - (y - this.y_mm) / this.mm_per_px }
  x(X) { return this.x_mm + (X - this.middle[0]) * this.mm_per_px }
  y(Y) { return this.y_mm - (Y - this.middle[1]) * this.mm_per_px }
  px(length) { return length / this.mm_per_px }

  fit() {
    const {width_mm, height_mm} = this.plate
    this.x_mm = width_mm / 2
    this.y_mm = height_mm / 2
    this.mm_per_px = Math.max(width_mm / Math.max(this.width - MARGIN.left - MARGIN.right, 40),
                              height_mm / Math.max(this.height - MARGIN.top - MARGIN.bottom, 40))
    this.fitted = true
  }
  zoom(factor, X, Y) {
    const size = Math.max(this.plate.width_mm, this.plate.height_mm)
    const next = clamp(this.mm_per_px / factor, size / 40000, size / 60)
    const [x, y] = [this.x(X), this.y(Y)]
    this.mm_per_px = next
    this.x_mm += x - this.x(X)
    this.y_mm += y - this.y(Y)
    this.fitted = false
  }
  pan(dX, dY) {
    this.x_mm -= dX * this.mm_per_px
    this.y_mm += dY * this.mm_per_px
    this.fitted = false
  }
}

// --- painting: field, isotherms, bands, rulers, colour bar ---------------------------------------------------

class Painter {
  constructor(canvas, view, palettes) {
    this.canvas = canvas
    this.view = view
    this.pen = canvas.getContext("2d")
    this.palettes = palettes
    this.picture = document.createElement("canvas")
    this.field = null
  }

  take(field) {
    this.field = field
    const {width, height, t, low, high} = field
    const colours = this.palettes[field.kind]
    const image = new ImageData(width, height)
    const scale = high > low ? 256 / (high - low) : 0
    for (let row = 0; row < height; row++) {
      let at = (height - 1 - row) * width * 4
      for (let n = row * width; n < (row + 1) * width; n++, at += 4) {
        const value = t[n]
        if (value !== value) continue
        const step = 3 * clamp(Math.floor((value - low) * scale), 0, 255)
        image.data[at] = colours[step]
        image.data[at + 1] = colours[step + 1]
        image.data[at + 2] = colours[step + 2]
        image.data[at + 3] = 255
      }
    }
    this.picture.width = width
    this.picture.height = height
    this.picture.getContext("2d").putImageData(image, 0, 0)
  }

  at(x, y) {
    const {field, view: {plate}} = this
    if (!field || x < 0 || y < 0 || x > plate.width_mm || y > plate.height_mm) return NaN
    const i = clamp(Math.floor(x / plate.width_mm * field.width), 0, field.width - 1)
    const j = clamp(Math.floor(y / plate.height_mm * field.height), 0, field.height - 1)
    return field.t[j * field.width + i]
  }

  readColours() {
    const style = getComputedStyle(this.canvas)
    this.colour = Object.fromEntries(["ink", "soft", "paper", "sheet", "well", "line", "fail", "warn"]
      .map((name) => [name, style.getPropertyValue(`--hs-${name}`).trim()]))
    this.font = style.fontFamily
    this.hatch = {over: this.#hatch("over"), near: this.#hatch("near"), void: this.#hatch("void")}
  }

  // taken: boxes in mm where no isotherm is labelled
  paint(taken) {
    const {canvas, view, pen} = this
    this.taken = taken
    const ratio = window.devicePixelRatio || 1
    if (canvas.width !== Math.round(view.width * ratio) || canvas.height !== Math.round(view.height * ratio)) {
      canvas.width = Math.round(view.width * ratio)
      canvas.height = Math.round(view.height * ratio)
    }
    if (!this.colour) this.readColours()
    pen.setTransform(ratio, 0, 0, ratio, 0, 0)
    pen.clearRect(0, 0, view.width, view.height)
    pen.font = `11px ${this.font}`
    pen.save()
    pen.beginPath()
    pen.rect(30, 0, view.width - 30 - 76, view.height - 26)
    pen.clip()
    this.#plate()
    pen.restore()
    this.#rulers()
    if (this.field) this.#bar()
  }

  #plate() {
    const {pen, view, field} = this
    const {width_mm, height_mm} = view.plate
    const box = [view.X(0), view.Y(height_mm), view.px(width_mm), view.px(height_mm)]
    pen.fillStyle = this.colour.well
    pen.fillRect(...box)
    pen.fillStyle = this.hatch.void
    pen.fillRect(...box)
    if (field) {
      pen.imageSmoothingEnabled = true
      pen.drawImage(this.picture, ...box)
      if (field.near) this.#band(field.near, this.hatch.near, this.colour.warn, [5, 4])
      if (field.over) this.#band(field.over, this.hatch.over, this.colour.fail, [])
      this.#isotherms()
    }
    pen.strokeStyle = this.colour.ink
    pen.lineWidth = 1.2
    pen.strokeRect(...box)
  }

  #band({xy, offsets}, hatch, colour, dash) {
    const {pen, view} = this
    if (offsets.length < 2) return
    pen.beginPath()
    for (let n = 0; n + 1 < offsets.length; n++) this.#trace(xy, offsets[n], offsets[n + 1], view)
    pen.fillStyle = hatch
    pen.fill("evenodd")
    pen.strokeStyle = colour
    pen.lineWidth = 1.6
    pen.setLineDash(dash)
    pen.stroke()
    pen.setLineDash([])
  }

  #trace(xy, from, to, view) {
    for (let n = from; n < to; n++) {
      const X = view.X(xy[2 * n]), Y = view.Y(xy[2 * n + 1])
      if (n === from) this.pen.moveTo(X, Y)
      else this.pen.lineTo(X, Y)
    }
  }

  #isotherms() {
    const {pen, view, field} = this
    const {xy, offsets, level_index: index, levels} = field.isotherms
    pen.beginPath()
    for (let n = 0; n + 1 < offsets.length; n++) this.#trace(xy, offsets[n], offsets[n + 1], view)
    pen.strokeStyle = "rgb(255 255 255 / 45%)"
    pen.lineWidth = 2.2
    pen.stroke()
    pen.strokeStyle = "rgb(20 24 26 / 80%)"
    pen.lineWidth = .9
    pen.stroke()
    const placed = []
    for (let n = 0; n + 1 < offsets.length; n++)
      this.#label(xy, offsets[n], offsets[n + 1], `${levels[index[n]]} ${field.unit}`, placed)
  }

  // A label lies on its line, upright, where the line is in sight and no other label is.
  #label(xy, from, to, text, placed) {
    const {pen, view} = this
    let length = 0
    const along = [0]
    for (let n = from + 1; n < to; n++) {
      length += view.px(Math.hypot(xy[2 * n] - xy[2 * n - 2], xy[2 * n + 1] - xy[2 * n - 1]))
      along.push(length)
    }
    const wide = pen.measureText(text).width
    if (length < 2.2 * wide) return
    for (const share of [.5, .3, .7, .15, .85]) {
      let n = along.findIndex((run) => run >= share * length)
      n = from + clamp(n, 1, to - from - 1)
      const X = view.X((xy[2 * n] + xy[2 * n - 2]) / 2), Y = view.Y((xy[2 * n + 1] + xy[2 * n - 1]) / 2)
      if (X < 30 + wide / 2 || X > view.width - 80 - wide / 2 || Y < 10 || Y > view.height - 40) continue
      if (placed.some(([x, y]) => Math.hypot(x - X, y - Y) < wide + 16)) continue
      const x = view.x(X), y = view.y(Y), near = 8 * view.mm_per_px
      if (this.taken.some((box) => x > box.x_mm - near && x < box.x_mm + box.width_mm + near
        && y > box.y_mm - near && y < box.y_mm + box.height_mm + near)) continue
      placed.push([X, Y])
      let turn = Math.atan2(xy[2 * n - 1] - xy[2 * n + 1], xy[2 * n] - xy[2 * n - 2])
      if (Math.abs(turn) > Math.PI / 2) turn += Math.PI
      pen.save()
      pen.translate(X, Y)
      pen.rotate(turn)
      pen.textAlign = "center"
      pen.textBaseline = "middle"
      pen.lineWidth = 3.5
      pen.strokeStyle = "rgb(255 255 255 / 85%)"
      pen.strokeText(text, 0, 0)
      pen.fillStyle = "#14181a"
      pen.fillText(text, 0, 0)
      pen.restore()
      return
    }
  }

  #rulers() {
    const {pen, view} = this
    const step = roundStep(view.mm_per_px * 62)
    const bottom = view.height - 24
    pen.fillStyle = this.colour.sheet
    pen.fillRect(0, 0, 28, view.height)
    pen.fillRect(0, bottom, view.width, 24)
    pen.strokeStyle = this.colour.line
    pen.fillStyle = this.colour.soft
    pen.lineWidth = 1
    pen.textBaseline = "middle"
    pen.beginPath()
    pen.moveTo(28.5, 0)
    pen.lineTo(28.5, bottom + .5)
    pen.lineTo(view.width, bottom + .5)
    pen.textAlign = "center"
    for (let n = Math.ceil(view.x(34) / step); n * step <= view.x(view.width - 8); n++) {
      const X = Math.round(view.X(n * step)) + .5
      pen.moveTo(X, bottom)
      pen.lineTo(X, bottom + 5)
      if (X > 44 && X < view.width - 16) pen.fillText(`${mm(n * step)}`, X, bottom + 14)
    }
    for (let n = Math.ceil(view.y(bottom - 4) / step); n * step <= view.y(6); n++) {
      const Y = Math.round(view.Y(n * step)) + .5
      pen.moveTo(28, Y)
      pen.lineTo(23, Y)
      pen.save()
      pen.translate(13, Y)
      pen.rotate(-Math.PI / 2)
      if (Y < bottom - 14 && Y > 16) pen.fillText(`${mm(n * step)}`, 0, 0)
      pen.restore()
    }
    pen.stroke()
    pen.fillText("mm", 14, bottom + 13)
  }

  #bar() {
    const {pen, view, field} = this
    const top = 46, height = Math.max(view.height - 46 - 70, 60), left = view.width - 66, width = 14
    const colours = this.palettes[field.kind]
    for (let n = 0; n < height; n++) {
      const step = 3 * clamp(Math.floor((1 - n / height) * 256), 0, 255)
      pen.fillStyle = `rgb(${colours[step]} ${colours[step + 1]} ${colours[step + 2]})`
      pen.fillRect(left, top + n, width, 1.5)
    }
    pen.strokeStyle = this.colour.ink
    pen.lineWidth = 1
    pen.strokeRect(left + .5, top + .5, width - 1, height - 1)
    pen.fillStyle = this.colour.ink
    pen.textAlign = "left"
    pen.textBaseline = "middle"
    pen.fillText(field.unit, left, top - 24)
    const place = (value) => top + (field.high - value) / (field.high - field.low) * height
    const marks = field.high > field.low ? field.marks.filter((mark) => mark > field.low && mark < field.high) : []
    let last = Infinity
    for (const level of field.isotherms.levels) {
      const Y = place(level)
      if (last - Y < 14 || marks.some((mark) => Math.abs(place(mark) - Y) < 13)) continue
      last = Y
      pen.fillRect(left + width, Y - .5, 4, 1)
      pen.fillText(`${level}`, left + width + 6, Y)
    }
    pen.font = `700 11px ${this.font}`
    pen.fillStyle = this.colour.fail
    for (const mark of marks) {
      pen.fillRect(left - 5, place(mark) - 1, width + 10, 2)
      pen.fillText(`${mm(mark)} lim`, left + width + 6, place(mark))
    }
    pen.font = `11px ${this.font}`
    pen.fillStyle = this.colour.soft
    pen.fillText(field.high.toFixed(1), left, top - 9)
    pen.fillText(field.low.toFixed(1), left, top + height + 10)
  }

  #hatch(name) {
    const tile = document.createElement("canvas")
    const size = {over: 11, near: 14, void: 6}[name]
    tile.width = tile.height = size
    const pen = tile.getContext("2d")
    pen.lineWidth = name === "over" ? 1.2 : 1
    pen.globalAlpha = .8
    pen.strokeStyle = {over: this.colour.fail, near: this.colour.warn, void: this.colour.line}[name]
    pen.beginPath()
    const rise = name !== "void"
    for (const shift of [-size, 0, size]) {
      pen.moveTo(shift - 1, rise ? size + 1 : -1)
      pen.lineTo(shift + size + 1, rise ? -1 : size + 1)
      if (name === "over") {
        pen.moveTo(shift - 1, -1)
        pen.lineTo(shift + size + 1, size + 1)
      }
    }
    pen.stroke()
    return this.pen.createPattern(tile, "repeat")
  }
}

// --- shapes: sources, zones, contacts, edges, handles, peak ------------------------------------------------

class Shapes {
  constructor(root, view) {
    this.view = view
    this.layers = {}
    root.append(this.#patterns())
    for (const name of ["shapes", "edges", "peak", "guides", "handles"])
      root.append(this.layers[name] = svg("g", {class: name}))
    this.nodes = new Map()
    this.edgeNodes = new Map()
    this.parts = {}
    this.peak = null
  }

  #patterns() {
    return svg("defs", {},
      svg("pattern", {id: "hs-void", width: 7, height: 7, patternUnits: "userSpaceOnUse", patternTransform: "rotate(45)"},
        svg("line", {x1: 0, y1: 0, x2: 0, y2: 7, stroke: "var(--hs-ink)", "stroke-width": 1.4, opacity: .55})),
      svg("pattern", {id: "hs-dots", width: 7, height: 7, patternUnits: "userSpaceOnUse"},
        svg("circle", {cx: 3.5, cy: 3.5, r: 1.1, fill: "var(--hs-ink)", opacity: .5})))
  }

  draw(shapes, edges, alone) {
    this.shapes = shapes
    this.taken = shapes.filter(({kind}) => kind !== "zone").map((shape) => ({...this.#box(shape), of: shape}))
    this.#peak()
    this.#rectangles(shapes)
    this.#edges(edges)
    this.#handles(alone)
  }

  // Only what the hand moves has changed: the rest, hundreds of shapes perhaps, stays as it is drawn.
  drawMoved(moved, alone) {
    for (const shape of moved) {
      const node = this.nodes.get(key(shape))
      if (node) this.#place(node, shape)
    }
    this.#handles(alone)
  }

  #box({x_mm, y_mm, width_mm, height_mm}) {
    const {view} = this
    return {X: view.X(x_mm), Y: view.Y(y_mm + height_mm), W: view.px(width_mm), H: view.px(height_mm)}
  }

  // The first of the boxes that covers nothing written or drawn already, and takes its place; null when all do.
  #free(boxes, own) {
    const apart = (a, b) => a.X + a.W <= b.X || b.X + b.W <= a.X || a.Y + a.H <= b.Y || b.Y + b.H <= a.Y
    const {width, height} = this.view
    const found = boxes.find((box) => box.X > 28 && box.X + box.W < width - 70 && box.Y > 2 && box.Y + box.H < height - 26
      && this.taken.every((other) => other.of === own && own || apart(box, other)))
    if (found) this.taken.push({...found, of: own})
    return found ?? null
  }

  #rectangles(shapes) {
    const seen = new Set()
    shapes.forEach((shape, order) => {
      const name = key(shape)
      seen.add(name)
      let node = this.nodes.get(name)
      if (!node) this.nodes.set(name, node = this.#newShape(shape))
      this.#place(node, shape)
      if (this.layers.shapes.children[order] !== node)
        this.layers.shapes.insertBefore(node, this.layers.shapes.children[order] ?? null)
    })
    for (const [name, node] of this.nodes)
      if (!seen.has(name)) {
        node.remove()
        this.nodes.delete(name)
      }
  }

  #newShape(shape) {
    const node = svg("g", {role: "img", "data-key": key(shape), "data-testid": `shape-${shape.kind}-${shape.id}`,
                           id: `hs-${shape.kind}-${shape.id}`},
      svg("title"), svg("rect", {class: "body"}))
    if (shape.kind === "source") node.append(svg("path", {class: "tick"}))
    if (shape.kind === "contact") node.append(svg("rect", {class: "inner"}))
    for (let n = 0; n < 3; n++) node.append(svg("text"))
    return node
  }

  #place(node, shape) {
    const {view} = this
    const {X, Y, W, H} = this.#box(shape)
    const part = shape.kind === "source" ? this.parts[shape.id] : null
    const words = part ? `${shape.about}, ${part.text}, ${WORD[part.verdict]}` : shape.about
    const name = ["shape", shape.kind, shape.void && "void", shape.aside && "aside", shape.selected && "selected"]
      .filter(Boolean).join(" ")
    const written = this.#lines(shape, part, {X, Y, W, H})
    const drawn = [X, Y, W, H, name, words, ...written.flatMap(({text, kind, y}) => [text, kind, y])].join("|")
    if (node.drawn === drawn) return
    node.drawn = drawn
    set(node, {class: name, "aria-label": words})
    node.firstChild.textContent = words
    set(node.querySelector(".body"), {x: X, y: Y, width: W, height: H})
    if (shape.kind === "source") {
      const c = Math.min(7, W / 3, H / 3)
      set(node.querySelector(".tick"), {d: `M${X},${Y + c}v${-c}h${c}M${X + W - c},${Y}h${c}v${c}` +
        `M${X + W},${Y + H - c}v${c}h${-c}M${X + c},${Y + H}h${-c}v${-c}`})
    }
    if (shape.kind === "contact")
      set(node.querySelector(".inner"), {x: X + 3, y: Y + 3, width: Math.max(W - 6, 0), height: Math.max(H - 6, 0)})
    ;[...node.querySelectorAll("text")].forEach((line, n) => {
      const {text, kind, y} = written[n] ?? {text: "", kind: "", y: Y}
      if (line.textContent !== text) line.textContent = text
      set(line, {x: X + W / 2, y, class: kind})
    })
  }

  // What is written on a shape: figures whole or not at all; a name that does not fit stands above or below.
  #lines(shape, part, {X, Y, W, H}) {
    const fits = (text) => text.length * 6.3 <= W - 6
    const lines = shape.lines.map((text, n) => ({text, kind: n ? "" : "name"}))
    if (part) {
      const figure = `${VERDICT[part.verdict]} ${part.text}`.trim()
      lines.push({text: fits(figure) ? figure : VERDICT[part.verdict], kind: part.verdict})
    }
    const inside = lines.filter(({text}) => text && fits(text))
    const room = Math.max(Math.floor((H - 4) / 13), 0)
    // When not all lines fit, the verdict is worth more than the watts.
    const chosen = inside.length > room && room === 2 && inside.length === 3 ? [inside[0], inside[2]] : inside.slice(0, room)
    const middle = this.#clearOfPeak(X + W / 2, Y, H, chosen.length * 13)
    const written = chosen.map((line, n) => ({...line, y: middle + (n - (chosen.length - 1) / 2) * 13 + 4}))
    if (!chosen.some(({kind}) => kind === "name") && this.shapes.length <= NAMED_OUTSIDE && !shape.void) {
      const wide = shape.lines[0].length * 6.8
      const place = this.#free([Y - 15, Y + H + 2].map((top) => ({X: X + W / 2 - wide / 2, Y: top, W: wide, H: 13})), shape)
      if (place) written.unshift({text: shape.lines[0], kind: "name", y: place.Y + 10})
    }
    return written
  }

  // The middle of a block of lines in a shape, moved off the mark of the peak where there is room.
  #clearOfPeak(X, Y, H, height) {
    const middle = Y + H / 2
    if (!this.peak || Math.abs(this.view.X(this.peak.x_mm) - X) > 40) return middle
    const at = this.view.Y(this.peak.y_mm)
    if (at < Y || at > Y + H || Math.abs(at - middle) > height / 2 + 10) return middle
    if (Y + H - at - 12 >= height) return at + 12 + height / 2
    return at - Y - 12 >= height ? at - 12 - height / 2 : middle
  }

  #edges(edges) {
    const seen = new Set()
    for (const [side, segments] of Object.entries(edges)) segments.forEach((segment, n) => {
      const name = `${side}:${n}`
      seen.add(name)
      let node = this.edgeNodes.get(name)
      if (!node) {
        node = svg("g", {role: "button", "data-edge": name, "data-testid": `edge-${side}-${n}`},
          svg("title"), svg("rect", {class: "grip"}), svg("path", {class: "mark"}), svg("text"), svg("circle", {r: 5}))
        this.edgeNodes.set(name, node)
        this.layers.edges.append(node)
      }
      this.#segment(node, side, n, segment, n + 1 < segments.length && segments[n + 1])
    })
    for (const [name, node] of this.edgeNodes)
      if (!seen.has(name)) {
        node.remove()
        this.edgeNodes.delete(name)
      }
  }

  #segment(node, side, n, segment, next) {
    const {view} = this
    const upright = side === "west" || side === "east"
    const out = {west: -1, east: 1, south: 1, north: -1}[side]
    const edge = {west: view.X(0), east: view.X(view.plate.width_mm), south: view.Y(0), north: view.Y(view.plate.height_mm)}[side]
    const from = upright ? view.Y(segment.to_mm) : view.X(segment.from_mm)
    const to = upright ? view.Y(segment.from_mm) : view.X(segment.to_mm)
    const length = to - from
    const at = edge + out * 9
    set(node, {class: `edge ${segment.kind}${segment.selected ? " selected" : ""}`, "aria-label": segment.about})
    node.firstChild.textContent = segment.about
    const [, grip, mark, text, cut] = node.children
    const near = Math.min(edge + out * 3, edge + out * 17)
    set(grip, upright ? {x: near, y: from, width: 14, height: Math.max(length, 0)}
                      : {x: from, y: near, width: Math.max(length, 0), height: 14})
    set(mark, {d: this.#mark(segment.kind, from, to, at, upright, out)})
    const middle = (from + to) / 2, away = edge + out * (out < 0 ? 22 : upright ? 26 : 29)
    text.textContent = segment.text.length * 6 < length ? segment.text : ""
    set(text, upright ? {x: 0, y: 0, transform: `translate(${away},${middle}) rotate(-90)`} : {x: middle, y: away, transform: ""})
    const shared = next && Math.abs(next.from_mm - segment.to_mm) < 1e-6
    set(cut, shared ? {class: `cut ${upright ? "y" : "x"}`, "data-cut": `${side}:${n}`, "data-testid": `cut-${side}-${n}`,
                       cx: upright ? at : to, cy: upright ? from : at, visibility: "visible"} : {visibility: "hidden"})
  }

  #mark(kind, from, to, at, upright, out) {
    const point = (along, off) => upright ? `${at + out * off},${along}` : `${along},${at + out * off}`
    if (kind === "fixed") return `M${point(from + 1, 0)}L${point(to - 1, 0)}`
    let path = ""
    if (kind === "insulated")
      for (let run = from + 3; run < to - 2; run += 7) path += `M${point(run, -4)}L${point(Math.min(run + 5, to), 4)}`
    else {
      path = `M${point(from + 1, 0)}`
      for (let run = from + 1, up = 1; run + 8 <= to - 1; run += 8, up = -up) path += `Q${point(run + 4, 8 * up)} ${point(run + 8, 0)}`
    }
    return path || "M0,0"
  }

  #handles(alone) {
    const box = this.layers.handles
    if (!alone) return void box.replaceChildren()
    if (box.children.length !== 8)
      box.replaceChildren(...Object.keys(HANDLES).map((name) =>
        svg("rect", {class: "handle", width: 9, height: 9, "data-handle": name, "data-testid": `handle-${name}`,
                     style: `cursor: ${CURSOR[name]}-resize`})))
    Object.values(HANDLES).forEach(([u, v], n) =>
      set(box.children[n], {x: this.view.X(alone.x_mm + u * alone.width_mm) - 4.5, y: this.view.Y(alone.y_mm + v * alone.height_mm) - 4.5}))
  }

  #peak() {
    const {peak, view, layers} = this
    this.peakBox = null
    if (!peak) return void layers.peak.replaceChildren()
    const X = view.X(peak.x_mm), Y = view.Y(peak.y_mm)
    const cross = `M${X - 9},${Y}h18M${X},${Y - 9}v18`
    // Beside the part that it lies in, where nothing else is written if there is such a place.
    const part = this.shapes.findLast(({kind, x_mm, y_mm, width_mm, height_mm}) => kind === "source" && peak.x_mm >= x_mm
      && peak.x_mm <= x_mm + width_mm && peak.y_mm >= y_mm && peak.y_mm <= y_mm + height_mm)
    const around = part ? this.#box(part) : {X: X - 9, Y: Y - 9, W: 18, H: 18}
    const wide = 6.9 * (peak.text.length + 5)
    const across = [X - 9, X + 9 - wide, X - wide / 2].map((at) => clamp(at, 30, Math.max(view.width - 72 - wide, 30)))
    const boxes = [around.Y - 18, around.Y + around.H + 3].flatMap((top) => across.map((at) => ({X: at, Y: top, W: wide, H: 15})))
    boxes.push(...[around.X + around.W + 6, around.X - wide - 6].map((at) => ({X: at, Y: Y - 7, W: wide, H: 15})))
    const beside = boxes.length
    for (const away of [50, 90, 140, 200]) for (let turn = 0; turn < 8; turn++)
      boxes.push({X: X + away * 1.4 * Math.cos(turn * Math.PI / 4) - wide / 2, Y: Y - away * Math.sin(turn * Math.PI / 4) - 7, W: wide, H: 15})
    const place = this.#free(boxes) ?? boxes[0]
    const far = boxes.indexOf(place) >= beside
    const tie = `M${X},${Y}L${clamp(X, place.X + 4, place.X + wide - 4)},${place.Y > Y ? place.Y : place.Y + 15}`
    layers.peak.replaceChildren(
      ...["", "over"].flatMap((name) => [svg("circle", {class: name, cx: X, cy: Y, r: 5}), svg("path", {class: name, d: far ? cross + tie : cross})]),
      svg("text", {x: place.X, y: place.Y + 12, "data-testid": "peak"}, `Peak ${peak.text}`))
    layers.peak.setAttribute("class", "peak")
    this.peakBox = {x_mm: view.x(place.X), width_mm: place.W * view.mm_per_px, y_mm: view.y(place.Y + place.H),
                    height_mm: place.H * view.mm_per_px}
  }

  guides(lines, ghost) {
    const {view} = this
    const drawn = lines.map(([axis, at]) => axis === "x"
      ? svg("line", {class: "guide", x1: view.X(at), x2: view.X(at), y1: 0, y2: view.height})
      : svg("line", {class: "guide", y1: view.Y(at), y2: view.Y(at), x1: 0, x2: view.width}))
    if (ghost) drawn.push(svg("rect", {class: "ghost", x: view.X(ghost.x_mm), y: view.Y(ghost.y_mm + ghost.height_mm),
                                       width: view.px(ghost.width_mm), height: view.px(ghost.height_mm)}))
    this.layers.guides.replaceChildren(...drawn)
  }
}

// --- snapping ------------------------------------------------------------------------------------------------

// Lines of one axis to which edges stick: the plate's, and the edges and middles of shapes that do not move.
function stickyLines(surface, axis, moving) {
  const [low, size] = axis === "x" ? ["x_mm", "width_mm"] : ["y_mm", "height_mm"]
  const lines = [0, surface.view.plate[size] / 2, surface.view.plate[size]]
  for (const shape of surface.shapes)
    if (!moving.has(key(shape))) lines.push(shape[low], shape[low] + shape[size] / 2, shape[low] + shape[size])
  return lines
}

// The shift that brings one of `places` onto a line, or the first of them onto the grid.
function snapped(surface, axis, places, moving) {
  let best = null
  const reach = SNAP_PX * surface.view.mm_per_px
  for (const line of stickyLines(surface, axis, moving)) for (const place of places)
    if (Math.abs(line - place) < Math.min(reach, best ? Math.abs(best.by) : Infinity)) best = {by: line - place, line}
  if (best) return best
  const step = surface.snap_mm
  return {by: Math.round(places[0] / step) * step - places[0], line: null}
}

// --- hand: gestures ------------------------------------------------------------------------------------------

class Hand {
  constructor(surface) {
    this.surface = surface
    this.gesture = null
    this.pointers = new Map()
    this.space = false
  }

  get busy() { return this.gesture !== null }

  down(event) {
    const {surface} = this
    const [X, Y] = surface.point(event)
    this.pointers.set(event.pointerId, [X, Y])
    if (this.pointers.size === 2) return this.#startPinch()
    if (this.gesture) return
    surface.root.focus({preventScroll: true})
    surface.svg.setPointerCapture(event.pointerId)
    if (event.button === 1 || (event.button === 0 && (this.space || surface.tool === "look"))) return this.#start({name: "pan", X, Y})
    if (event.button !== 0) return
    const start = {X, Y, x: surface.view.x(X), y: surface.view.y(Y), moved: false}
    if (surface.tool !== "select") return this.#start({...start, name: "draw", kind: surface.tool})
    const target = event.target
    if (target.dataset.handle) return this.#start({...start, name: "resize", handle: target.dataset.handle, ...this.#held()})
    if (target.dataset.cut && target.getAttribute("visibility") !== "hidden") return this.#startCut(start, target.dataset.cut)
    const edge = target.closest("[data-edge]")
    if (edge) return surface.select([{kind: "edge", id: edge.dataset.edge}])
    const shape = target.closest("[data-key]")
    if (!shape) return this.#start({...start, name: "band", add: event.shiftKey || event.ctrlKey || event.metaKey})
    this.#press(surface.find(shape.dataset.key), event, start)
  }

  #press(shape, event, start) {
    const {surface} = this
    const more = event.shiftKey || event.ctrlKey || event.metaKey
    if (more) surface.select(surface.chosen().filter((s) => s !== shape).concat(shape.selected ? [] : [shape]))
    else if (!shape.selected) surface.select([shape])
    if (shape.selected) this.#start({...start, name: "move", ...this.#held()})
  }

  #held() {
    const shapes = this.surface.chosen()
    return {shapes, before: shapes.map((s) => ({...s})), moving: new Set(shapes.map(key))}
  }

  #start(gesture) {
    this.gesture = gesture
    this.surface.root.classList.toggle("panning", gesture.name === "pan")
  }

  #startCut(start, name) {
    const [side, index] = name.split(":")
    this.#start({...start, name: "cut", side, index: Number(index), segments: this.surface.edges[side].map((s) => ({...s}))})
  }

  #startPinch() {
    if (this.gesture) this.cancel()
    this.#start({name: "pinch", last: [...this.pointers.values()]})
  }

  move(event) {
    const {surface, gesture} = this
    const [X, Y] = surface.point(event)
    if (this.pointers.has(event.pointerId)) this.pointers.set(event.pointerId, [X, Y])
    surface.hover(X, Y)
    if (!gesture) return
    if (Math.hypot(X - gesture.X, Y - gesture.Y) > 2) gesture.moved = true
    const free = event.altKey || !surface.snapping
    if (gesture.name === "pan") {
      surface.panBy(X - gesture.X, Y - gesture.Y)
      Object.assign(gesture, {X, Y})
    } else if (gesture.name === "pinch") this.#pinch()
    else if (gesture.moved) this[`on_${gesture.name}`](surface.view.x(X), surface.view.y(Y), free)
  }

  #pinch() {
    const now = [...this.pointers.values()]
    const {last} = this.gesture
    if (now.length < 2) return
    const spread = ([a, b]) => Math.hypot(a[0] - b[0], a[1] - b[1])
    const middle = ([a, b]) => [(a[0] + b[0]) / 2, (a[1] + b[1]) / 2]
    const [to, from] = [middle(now), middle(last)]
    this.surface.panBy(to[0] - from[0], to[1] - from[1])
    this.surface.zoomBy(spread(now) / Math.max(spread(last), 1), ...to)
    this.gesture.last = now
  }

  on_move(x, y, free) {
    const {surface, gesture} = this
    let dx = x - gesture.x, dy = y - gesture.y
    const guides = []
    if (!free) {
      const box = around(gesture.before)
      for (const [axis, low, size, d] of [["x", box.x_mm, box.width_mm, dx], ["y", box.y_mm, box.height_mm, dy]]) {
        const {by, line} = snapped(surface, axis, [low + d, low + d + size, low + d + size / 2], gesture.moving)
        if (axis === "x") dx += by
        else dy += by
        if (line !== null) guides.push([axis, line])
      }
    }
    [dx, dy] = onPlate(gesture.before, dx, dy, surface.view.plate)
    gesture.shapes.forEach((shape, n) =>
      Object.assign(shape, {x_mm: mm(gesture.before[n].x_mm + dx), y_mm: mm(gesture.before[n].y_mm + dy)}))
    surface.changed(gesture, `Move ${named(gesture.shapes)}`, guides)
  }

  on_resize(x, y, free) {
    const {surface, gesture} = this
    const [before] = gesture.before, [shape] = gesture.shapes
    const [u, v] = HANDLES[gesture.handle]
    const guides = []
    const stretched = (axis, low, size, side, to, length) => {
      if (side === .5) return [low, size]
      const bounded = shape.kind === "zone" ? [-Infinity, Infinity] : [0, length]
      if (!free) {
        const {by, line} = snapped(surface, axis, [to], gesture.moving)
        to += by
        if (line !== null) guides.push([axis, line])
      }
      if (side === 1) return [low, clamp(to, low + LEAST_MM, Math.max(bounded[1], low + LEAST_MM)) - low]
      const end = low + size
      const start = clamp(to, bounded[0], end - LEAST_MM)
      return [start, end - start]
    }
    const {plate} = surface.view
    const atX = before.x_mm + (u === 1 ? before.width_mm : 0) + x - gesture.x
    const atY = before.y_mm + (v === 1 ? before.height_mm : 0) + y - gesture.y
    const [x_mm, width_mm] = stretched("x", before.x_mm, before.width_mm, u, atX, plate.width_mm)
    const [y_mm, height_mm] = stretched("y", before.y_mm, before.height_mm, v, atY, plate.height_mm)
    Object.assign(shape, {x_mm: mm(x_mm), y_mm: mm(y_mm), width_mm: mm(width_mm), height_mm: mm(height_mm)})
    surface.changed(gesture, `Resize ${shape.id}`, guides)
  }

  on_draw(x, y, free) {
    const {surface, gesture} = this
    const guides = []
    const stick = (axis, at) => {
      if (free) return at
      const {by, line} = snapped(surface, axis, [at], new Set())
      if (line !== null) guides.push([axis, line])
      return at + by
    }
    const {plate} = surface.view
    const [x1, x2] = [stick("x", gesture.x), stick("x", x)].map((at) => clamp(at, 0, plate.width_mm)).sort((a, b) => a - b)
    const [y1, y2] = [stick("y", gesture.y), stick("y", y)].map((at) => clamp(at, 0, plate.height_mm)).sort((a, b) => a - b)
    gesture.ghost = {x_mm: mm(x1), y_mm: mm(y1), width_mm: mm(x2 - x1), height_mm: mm(y2 - y1)}
    surface.drawGuides(guides, gesture.ghost)
  }

  on_band(x, y) {
    const {gesture} = this
    gesture.ghost = {x_mm: Math.min(x, gesture.x), y_mm: Math.min(y, gesture.y),
                     width_mm: Math.abs(x - gesture.x), height_mm: Math.abs(y - gesture.y)}
    this.surface.drawGuides([], gesture.ghost)
  }

  on_cut(x, y, free) {
    const {surface, gesture} = this
    const upright = gesture.side === "west" || gesture.side === "east"
    const segments = surface.edges[gesture.side]
    let at = upright ? y : x
    if (!free) at += snapped(surface, upright ? "y" : "x", [at], new Set()).by
    at = mm(clamp(at, segments[gesture.index].from_mm + LEAST_MM, segments[gesture.index + 1].to_mm - LEAST_MM))
    segments[gesture.index].to_mm = segments[gesture.index + 1].from_mm = gesture.at_mm = at
    surface.redraw(SHAPES)
    surface.line.post({type: "cut", side: gesture.side, index: gesture.index, at_mm: at, final: false})
  }

  up(event) {
    const {surface, gesture} = this
    this.pointers.delete(event.pointerId)
    if (!gesture) return
    this.#end()
    if (gesture.name === "draw") this.#drawn(gesture)
    else if (gesture.name === "band") this.#banded(gesture)
    else if (gesture.moved && gesture.name === "cut")
      surface.line.post({type: "cut", side: gesture.side, index: gesture.index, at_mm: gesture.at_mm, final: true})
    else if (gesture.moved && gesture.label) surface.line.post({...shapesMessage(gesture), final: true})
    surface.settle()
  }

  #drawn({kind, x, y, ghost, moved}) {
    const {surface} = this
    const {plate} = surface.view
    if (!moved || !ghost || Math.min(ghost.width_mm, ghost.height_mm) < LEAST_MM) {
      const width_mm = Math.min(NEW_MM, plate.width_mm), height_mm = Math.min(NEW_MM, plate.height_mm)
      ghost = {x_mm: mm(clamp(x - width_mm / 2, 0, plate.width_mm - width_mm)),
               y_mm: mm(clamp(y - height_mm / 2, 0, plate.height_mm - height_mm)), width_mm, height_mm}
    }
    surface.setTool("select")
    surface.line.tell({type: "draw", kind, ...ghost, final: true})
  }

  #banded({ghost, add}) {
    const {surface} = this
    const inside = ghost ? surface.shapes.filter((s) => s.x_mm >= ghost.x_mm && s.y_mm >= ghost.y_mm
      && s.x_mm + s.width_mm <= ghost.x_mm + ghost.width_mm && s.y_mm + s.height_mm <= ghost.y_mm + ghost.height_mm) : []
    surface.select(add ? [...new Set([...surface.chosen(), ...inside])] : inside)
  }

  // Steps with the arrow keys: one gesture from the first press to the release.
  nudge(dx, dy) {
    const {surface} = this
    if (this.gesture && this.gesture.name !== "nudge") return
    if (!this.gesture) this.#start({name: "nudge", ...this.#held()})
    const {gesture} = this
    ;[dx, dy] = onPlate(gesture.shapes, dx, dy, surface.view.plate)
    for (const shape of gesture.shapes) Object.assign(shape, {x_mm: mm(shape.x_mm + dx), y_mm: mm(shape.y_mm + dy)})
    surface.changed(gesture, `Move ${named(gesture.shapes)}`, [])
  }

  endNudge() {
    const {surface, gesture} = this
    if (gesture?.name !== "nudge") return
    this.#end()
    surface.line.post({...shapesMessage(gesture), final: true})
    surface.settle()
  }

  cancel() {
    const {surface, gesture} = this
    if (!gesture) return false
    this.#end()
    gesture.before?.forEach((before, n) => Object.assign(gesture.shapes[n], before))
    if (gesture.segments) surface.edges[gesture.side] = gesture.segments
    if (gesture.name === "draw") surface.setTool("select")
    if (gesture.label || gesture.name === "cut") surface.line.cancel()
    surface.settle()
    return true
  }

  #end() {
    this.gesture = null
    this.surface.root.classList.remove("panning")
    this.surface.drawGuides([], null)
  }
}

function shapesMessage({shapes, label}) {
  const items = shapes.map(({kind, id, x_mm, y_mm, width_mm, height_mm}) => ({kind, id, x_mm, y_mm, width_mm, height_mm}))
  return {type: "shapes", items, label}
}

const named = (shapes) => shapes.length === 1 ? shapes[0].id : `${shapes.length} things`

function around(shapes) {
  const x_mm = Math.min(...shapes.map((s) => s.x_mm)), y_mm = Math.min(...shapes.map((s) => s.y_mm))
  return {x_mm, y_mm, width_mm: Math.max(...shapes.map((s) => s.x_mm + s.width_mm)) - x_mm,
          height_mm: Math.max(...shapes.map((s) => s.y_mm + s.height_mm)) - y_mm}
}

// A step that keeps sources and contacts on the plate; zones may reach past it but not leave it.
function onPlate(shapes, dx, dy, plate) {
  for (const s of shapes) {
    const slackX = s.kind === "zone" ? s.width_mm - LEAST_MM : 0, slackY = s.kind === "zone" ? s.height_mm - LEAST_MM : 0
    dx = clamp(dx, -s.x_mm - slackX, plate.width_mm - s.x_mm - s.width_mm + slackX)
    dy = clamp(dy, -s.y_mm - slackY, plate.height_mm - s.y_mm - s.height_mm + slackY)
  }
  return [dx, dy]
}

// --- keys ----------------------------------------------------------------------------------------------------

const ARROWS = {ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1]}

function onKey(surface, event) {
  const {hand} = surface
  const control = event.ctrlKey || event.metaKey
  const arrow = ARROWS[event.key]
  if (event.key === " ") hand.space = true
  else if (event.key === "Escape") {
    if (!hand.cancel()) {
      if (surface.tool !== "select") surface.setTool("select")
      else surface.select([])
      surface.leaving = true
    }
  } else if (event.key === "Tab") {
    if (control || event.altKey || !surface.step(event.shiftKey ? -1 : 1)) return
  } else if (arrow && surface.chosen().length) {
    const step = event.altKey ? .1 : event.shiftKey ? 10 * surface.snap_mm : surface.snap_mm
    hand.nudge(arrow[0] * step, arrow[1] * step)
  } else if (arrow) surface.panBy(-40 * arrow[0], 40 * arrow[1])
  else if (event.key === "Delete" || event.key === "Backspace") surface.command("delete")
  else if (control && event.key.toLowerCase() === "d") surface.command("duplicate")
  else if (control && event.key.toLowerCase() === "a") surface.select(surface.shapes)
  else if (!control && (event.key === "+" || event.key === "=")) surface.zoomBy(1.25, ...surface.view.middle)
  else if (!control && event.key === "-") surface.zoomBy(.8, ...surface.view.middle)
  else if (!control && event.key === "0") surface.fit(true)
  else return
  event.preventDefault()
  event.stopPropagation()
}

// --- line: what is told, one question under way -------------------------------------------------------------

class Line {
  constructor(send, told) {
    this.send = send
    this.told = told
    this.seq = 0
    this.finalSeq = 0
    this.underWay = null
    this.waiting = []
  }

  tell(message) {
    message.seq = ++this.seq
    if (message.final) this.finalSeq = message.seq
    this.send(message)
  }

  // A draft that waits gives way to the next message of its gesture; a final one is never dropped.
  post(message) {
    message.seq = ++this.seq
    if (message.final) this.finalSeq = message.seq
    const last = this.waiting.at(-1)
    if (last && !last.final) this.waiting.pop()
    this.waiting.push(message)
    this.#pump()
  }

  cancel() {
    this.waiting = this.waiting.filter((message) => message.final)
    this.tell({type: "cancel", final: true})
  }

  answered(seq) {
    this.told(true)
    if (!this.underWay || seq < this.underWay.seq) return
    clearTimeout(this.timer)
    this.underWay = null
    this.#pump()
  }

  #pump() {
    if (this.underWay || !this.waiting.length) return
    this.underWay = this.waiting.shift()
    this.#go()
  }

  #go() {
    this.send(this.underWay)
    this.timer = setTimeout(() => {
      this.told(false)
      this.#go()
    }, PATIENCE_MS)
  }
}

// --- the component -------------------------------------------------------------------------------------------

class Surface {
  constructor(model, el) {
    this.model = model
    this.view = new View()
    this.shapes = []
    this.edges = {west: [], east: [], south: [], north: []}
    this.snap_mm = .5
    this.snapping = true
    this.tool = "select"
    this.held = null
    this.leaving = false
    this.replies = 0
    this.#build(el, model)
    this.painter = new Painter(this.canvas, this.view, model.palettes)
    this.drawing = new Shapes(this.svg, this.view)
    this.hand = new Hand(this)
    this.line = new Line((message) => model.send_msg(message), (heard) => this.#link(heard))
    this.#listen()
  }

  #build(el, model) {
    this.root = document.createElement("div")
    this.root.className = "stage"
    Object.assign(this.root.dataset, {testid: "stage", state: "solving", tool: "select", replies: "0"})
    this.root.tabIndex = 0
    this.root.setAttribute("role", "application")
    this.root.setAttribute("aria-label", `${model.caption || "Plate"}: Tab steps through what lies on it, arrow keys move it`)
    this.canvas = document.createElement("canvas")
    this.svg = svg("svg")
    const foot = document.createElement("div")
    foot.className = "foot"
    foot.innerHTML = `<span class="here" data-testid="here">&nbsp;</span><span class="state" data-testid="state"></span>
      <span class="legend">
        <span hidden data-band="near"><svg><rect width="22" height="13" fill="url(#hs-near)" stroke="var(--hs-warn)"
          stroke-dasharray="4 3"/></svg><i></i></span>
        <span hidden data-band="over"><svg><rect width="22" height="13" fill="url(#hs-over)" stroke="var(--hs-fail)"/></svg><i></i></span>
      </span>`
    this.svg.append(svg("defs", {},
      svg("pattern", {id: "hs-near", width: 8, height: 8, patternUnits: "userSpaceOnUse"},
        svg("path", {d: "M-1,9L9,-1", stroke: "var(--hs-warn)", "stroke-width": 1.3})),
      svg("pattern", {id: "hs-over", width: 6, height: 6, patternUnits: "userSpaceOnUse"},
        svg("path", {d: "M-1,7L7,-1M-1,-1L7,7", stroke: "var(--hs-fail)", "stroke-width": 1.4}))))
    this.root.append(this.canvas, this.svg, foot)
    el.append(this.root)
  }

  #listen() {
    const {root, hand} = this
    this.svg.addEventListener("pointerdown", (event) => hand.down(event))
    this.svg.addEventListener("pointermove", (event) => hand.move(event))
    this.svg.addEventListener("pointerup", (event) => hand.up(event))
    this.svg.addEventListener("pointercancel", (event) => { hand.pointers.delete(event.pointerId); hand.cancel() })
    this.svg.addEventListener("pointerleave", () => this.#here(""))
    this.svg.addEventListener("dblclick", (event) => { if (!event.target.closest("[data-key], [data-edge]")) this.fit(true) })
    this.svg.addEventListener("auxclick", (event) => event.preventDefault())
    root.addEventListener("wheel", (event) => {
      event.preventDefault()
      this.zoomBy(Math.exp(-clamp(event.deltaY, -240, 240) * (event.ctrlKey ? .01 : .0016)), ...this.point(event))
    }, {passive: false})
    root.addEventListener("keydown", (event) => onKey(this, event))
    root.addEventListener("keyup", (event) => {
      if (event.key === " ") hand.space = false
      if (ARROWS[event.key]) hand.endNudge()
    })
    root.addEventListener("blur", () => { hand.space = false; hand.endNudge(); this.leaving = false })
    root.addEventListener("dragover", (event) => event.preventDefault())
    root.addEventListener("drop", (event) => this.#dropped(event))
    this.observer = new ResizeObserver(() => this.#resized())
    this.observer.observe(root)
    this.themes = new MutationObserver(() => { this.painter.colour = null; this.redraw() })
    this.themes.observe(document.documentElement, {attributes: true, attributeFilter: ["data-theme"]})
  }

  close() {
    this.observer.disconnect()
    this.themes.disconnect()
    clearTimeout(this.line.timer)
  }

  // What is on it

  find(name) { return this.shapes.find((shape) => key(shape) === name) }
  chosen() { return this.shapes.filter((shape) => shape.selected) }

  select(things) {
    const names = new Set(things.map(key))
    for (const shape of this.shapes) shape.selected = names.has(key(shape))
    for (const [side, segments] of Object.entries(this.edges))
      segments.forEach((segment, n) => { segment.selected = names.has(`edge:${side}:${n}`) })
    this.line.tell({type: "select", refs: things.map(({kind, id}) => ({kind, id}))})
    this.redraw(SHAPES)
  }

  // Selects the next or previous shape; false at the end, where the focus moves on.
  step(way) {
    const order = this.shapes
    const at = order.findIndex((shape) => shape.selected)
    const next = at < 0 ? (way > 0 ? 0 : order.length - 1) : at + way
    if (this.leaving || !order[next]) {
      this.leaving = false
      return false
    }
    this.select([order[next]])
    this.root.setAttribute("aria-activedescendant", `hs-${order[next].kind}-${order[next].id}`)
    return true
  }

  command(name) { this.line.tell({type: "command", name, final: true}) }

  changed(gesture, label, guides) {
    gesture.label = label
    gesture.moved = true
    this.drawGuides(guides, null)
    this.redraw(MOVED)
    this.line.post({...shapesMessage(gesture), final: false})
  }

  setTool(name) {
    this.tool = name
    this.root.dataset.tool = name
    this.line.tell({type: "tool", name})
  }

  // Messages

  take(message) {
    if (message.type === "scene") this.#scene(message)
    else if (message.type === "field") this.#field(message)
    else if (message.type === "status") this.#status(message)
    else if (message.type === "tool") {
      this.tool = this.root.dataset.tool = message.name
      this.snapping = message.snap
    } else if (message.type === "view") this.#look(message)
    else if (message.type === "fit") this.fit(false)
  }

  #scene(scene) {
    if (this.hand.busy) return void (this.held = scene)
    if (scene.seq < this.line.finalSeq) return
    this.held = null
    const {plate} = this.view
    const resized = plate.width_mm !== scene.plate.width_mm || plate.height_mm !== scene.plate.height_mm
    this.view.plate = scene.plate
    this.shapes = scene.shapes
    this.edges = scene.edges
    this.snap_mm = scene.snap_mm
    if (resized || this.view.fitted) this.view.fit()
    this.redraw()
  }

  // After a gesture: what came meanwhile counts, unless it is older than the gesture's end.
  settle() {
    if (this.held) this.#scene(this.held)
    this.redraw()
  }

  #field(field) {
    this.painter.take(field)
    this.drawing.parts = field.parts
    this.drawing.peak = field.peak
    const legend = (name, rings, text) => {
      const entry = this.root.querySelector(`[data-band="${name}"]`)
      entry.hidden = !rings || rings.offsets.length < 2
      entry.querySelector("i").textContent = text
    }
    legend("near", field.near, "near limit")
    legend("over", field.over, "over limit")
    Object.assign(this.root.dataset, {replies: String(++this.replies), over: field.over?.offsets.length > 1 ? "yes" : "no",
                                      near: field.near?.offsets.length > 1 ? "yes" : "no", answered: String(field.seq)})
    this.line.answered(field.seq)
    this.redraw()
  }

  #status({state, text, seq}) {
    this.root.dataset.state = state
    this.stateText = text
    this.line.answered(seq)
    this.#link(true)
  }

  #link(heard) {
    this.root.dataset.link = heard ? "there" : "lost"
    this.root.querySelector(".state").textContent = heard ? this.stateText ?? "" : "No answer from the studio; trying again"
  }

  // Looking around

  point(event) {
    const box = this.svg.getBoundingClientRect()
    return [event.clientX - box.left, event.clientY - box.top]
  }

  panBy(dX, dY) { this.view.pan(dX, dY); this.#seen() }
  zoomBy(factor, X, Y) { this.view.zoom(factor, X, Y); this.#seen() }
  fit(tell) { this.view.fit(); tell ? this.#seen() : this.redraw() }

  #seen() {
    const {x_mm, y_mm, mm_per_px} = this.view
    this.line.tell({type: "view", x_mm, y_mm, mm_per_px})
    this.redraw()
  }

  #look({x_mm, y_mm, mm_per_px}) {
    Object.assign(this.view, {x_mm, y_mm, mm_per_px, fitted: false})
    this.redraw()
  }

  #resized() {
    const {clientWidth, clientHeight} = this.root
    if (!clientWidth) return
    this.view.width = clientWidth
    this.view.height = clientHeight - FOOT
    if (this.view.fitted) this.view.fit()
    this.changedMost = PAPER
    this.draw()
  }

  hover(X, Y) {
    const x = this.view.x(X), y = this.view.y(Y)
    const {plate} = this.view
    if (x < 0 || y < 0 || x > plate.width_mm || y > plate.height_mm) return this.#here("")
    const t = this.painter.at(x, y)
    this.#here(`x ${x.toFixed(1)} mm  y ${y.toFixed(1)} mm  ${Number.isNaN(t) ? "no temperature" : `${t.toFixed(1)} ${this.painter.field.unit}`}`)
  }

  #here(text) { this.root.querySelector(".here").textContent = text }

  async #dropped(event) {
    event.preventDefault()
    const file = event.dataTransfer.files[0]
    if (!file) return
    const text = file.size > MOST_DROPPED ? null : await file.text()
    this.line.tell({type: "drop", name: file.name, size: file.size, text})
  }

  // Drawing, once a frame

  drawGuides(lines, ghost) { this.guides = [lines, ghost]; this.redraw(MOVED) }

  redraw(what = PAPER) {
    this.changedMost = Math.max(this.changedMost ?? MOVED, what)
    if (this.due) return
    this.due = requestAnimationFrame(() => this.draw())
  }

  draw() {
    cancelAnimationFrame(this.due)
    const what = this.changedMost
    this.due = this.changedMost = null
    const chosen = this.chosen()
    const alone = chosen.length === 1 ? chosen[0] : null
    if (what === MOVED) this.drawing.drawMoved(this.hand.gesture?.shapes ?? [], alone)
    else this.drawing.draw(this.shapes, this.edges, alone)
    if (what === PAPER)
      this.painter.paint([...this.shapes.filter(({kind}) => kind !== "zone"), this.drawing.peakBox].filter(Boolean))
    if (this.guides) this.drawing.guides(...this.guides)
    this.root.dataset.drawn = String(1 + Number(this.root.dataset.drawn ?? 0))
  }
}

export function render({model, el}) {
  const surface = new Surface(model, el)
  model.on("msg:custom", (message) => surface.take(message))
  surface.line.tell({type: "ready"})
  return () => surface.close()
}
