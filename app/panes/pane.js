// Shows the HTML its server gives it, changing only what differs, and tells the server what was used.

// Make the children of `have` like those of `want`; nodes that stay keep their focus, caret and scroll.
function morph(have, want) {
  const keyed = new Map()
  for (const child of have.children) if (child.dataset.key) keyed.set(child.dataset.key, child)
  let at = have.firstChild
  for (const wanted of [...want.childNodes]) {
    const key = wanted.dataset?.key
    let node = at
    if (key && keyed.has(key)) {
      node = keyed.get(key)
      if (node !== at) have.insertBefore(node, at)
    } else if (!node || node.nodeName !== wanted.nodeName || node.dataset?.key !== key || node.id !== wanted.id) {
      have.insertBefore(wanted, at)
      continue
    }
    if (node.nodeType === Node.ELEMENT_NODE) update(node, wanted)
    else if (node.nodeValue !== wanted.nodeValue) node.nodeValue = wanted.nodeValue
    at = node.nextSibling
  }
  while (at) {
    const next = at.nextSibling
    at.remove()
    at = next
  }
}

// Attributes the browser sets itself: where a popover stands, whether a dialog or a fold is open.
const OWN = {style: (node) => node.popover, open: (node) => node.matches("dialog, details")}

function update(node, wanted) {
  for (const {name} of [...node.attributes])
    if (!wanted.hasAttribute(name) && !OWN[name]?.(node)) node.removeAttribute(name)
  for (const {name, value} of wanted.attributes)
    if (node.getAttribute(name) !== value && !OWN[name]?.(node)) node.setAttribute(name, value)
  if (node.localName === "textarea") return void show(node, wanted.value)
  morph(node, wanted)
  if (node.localName === "input") {
    if (node.type === "checkbox" || node.type === "radio") node.checked = wanted.checked
    else if (node.type !== "file") show(node, wanted.getAttribute("value") ?? "")
  } else if (node.localName === "select") show(node, wanted.value)
}

// A field shows the server's value unless something is being typed into it.
function show(field, value) {
  if (!field.typed && field.value !== value) field.value = value
}

function stand(popover, invoker) {
  const box = invoker.getBoundingClientRect()
  popover.style.cssText = box.left > innerWidth / 2
    ? `top:${box.bottom + 4}px;right:${Math.max(innerWidth - box.right, 4)}px;left:auto`
    : `top:${box.bottom + 4}px;left:${box.left}px`
  popover.style.maxHeight = `${innerHeight - box.bottom - 16}px`
}

function chord(event) {
  const key = event.key.length === 1 ? event.key.toLowerCase() : event.key
  return [(event.ctrlKey || event.metaKey) && "Ctrl", event.altKey && "Alt",
          event.shiftKey && key.length > 1 | /[a-z]/.test(key) && "Shift", key].filter(Boolean).join("+")
}

export function render({model, el}) {
  const root = document.createElement("div")
  root.className = "pane"

  let html = ""
  const apply = () => {
    const wanted = document.createElement("template")
    wanted.innerHTML = html
    morph(root, wanted.content)
    for (const dialog of root.querySelectorAll("dialog:not([open])")) dialog.showModal()
    fade()
    root.dataset.drawn = 1 + Number(root.dataset.drawn ?? 0)
  }

  // What only informs goes by itself.
  let fading = null
  const fade = () => {
    const passing = root.querySelector("[data-fades]")
    if (passing === fading?.node) return
    clearTimeout(fading?.timer)
    fading = passing && {node: passing, timer: setTimeout(() => passing.querySelector("[data-act]")?.click(),
                                                          Number(passing.dataset.fades))}
  }

  const send = (control, more) => {
    const {act, arg} = control.dataset
    if (control.closest("[data-closes]")) control.closest("[popover]")?.hidePopover()
    model.send_msg({act, arg: arg === undefined ? null : JSON.parse(arg), ...more})
  }

  const sendFile = async (control) => {
    const file = control.files[0]
    control.value = ""
    if (!file) return
    const most = Number(control.dataset.most)
    // Too large a file would break the connection: its size is told instead of its text.
    const text = file.size > most ? null : await file.text()
    send(control, {file: {name: file.name, size: file.size, text}})
  }

  root.addEventListener("click", (event) => {
    const control = event.target.closest("[data-act]")
    if (control && !control.matches("form, input, select, textarea")) send(control, {value: null})
    const press = event.target.closest("[data-opens]")
    if (press) root.querySelector(press.dataset.opens)?.click()
  })
  root.addEventListener("input", (event) => {
    if (!event.target.matches("select, [type=checkbox], [type=radio]")) event.target.typed = true
  })
  root.addEventListener("change", (event) => {
    const control = event.target
    if (!control.dataset.act) return // a field of a form: it is sent with the form
    control.typed = false
    if (control.type === "file") sendFile(control)
    else send(control, {value: control.type === "checkbox" ? control.checked : control.value})
  })
  root.addEventListener("submit", (event) => {
    event.preventDefault()
    for (const field of event.target.elements) field.typed = false
    send(event.target, {values: Object.fromEntries(new FormData(event.target))})
  })
  root.addEventListener("keydown", (event) => {
    const field = event.target
    if (event.key === "Escape" && field.typed) {
      field.value = field.defaultValue
      field.typed = false
      event.stopPropagation()
      event.preventDefault()
    }
    const way = {ArrowUp: 1, ArrowDown: -1, PageUp: 10, PageDown: -10}[event.key]
    if (way && field.dataset.step && field.value.trim() !== "" && Number.isFinite(Number(field.value))) {
      event.preventDefault()
      const step = Number(field.dataset.step)
      field.value = String(Number((Number(field.value) + way * step).toFixed(6)))
      field.dispatchEvent(new Event("change", {bubbles: true}))
    }
  })
  root.addEventListener("beforetoggle", (event) => {
    if (event.newState === "open" && event.target.popover && !event.target.matches(".middle")) {
      const invoker = root.querySelector(`[popovertarget="${event.target.id}"]`)
      if (invoker) stand(event.target, invoker)
    }
  }, true)
  root.addEventListener("toggle", (event) => {
    if (event.newState === "open") event.target.querySelector("[autofocus]")?.focus()
  }, true)
  root.addEventListener("cancel", (event) => {
    event.preventDefault()
    if (event.target.dataset.cancel) model.send_msg({act: event.target.dataset.cancel, arg: null})
  }, true)

  const shortcut = (event) => {
    if (event.defaultPrevented) return
    const typing = event.composedPath()[0].matches?.("input:not([type=checkbox]):not([type=radio]), select, textarea")
    const keys = chord(event)
    const control = root.querySelector(`[data-keys~="${CSS.escape(keys)}"]:not(:disabled)`)
    if (!control || (typing && !control.matches("[data-keys-typing]"))) return
    event.preventDefault()
    if (typing) event.composedPath()[0].blur()
    if (control.matches("section")) control.querySelector("input, select")?.focus()
    else control.click()
  }
  document.addEventListener("keydown", shortcut)
  model.on("remove", () => document.removeEventListener("keydown", shortcut))
  model.on("msg:custom", (message) => {
    if ("html" in message) html = message.html
    apply()
  })
  model.send_msg({ready: true})
  return root
}
