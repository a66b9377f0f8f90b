// What the page asks of the browser beside showing things. Messages: see browser.py.

export function render({model, el}) {
  const root = document.documentElement
  let unsaved = false
  let lost = false

  const remember = (id) => {
    const address = new URL(location.href)
    address.searchParams.set("desk", id)
    history.replaceState(null, "", address)
  }

  const download = ({name, text}) => {
    const link = document.createElement("a")
    link.href = URL.createObjectURL(new Blob([text], {type: "application/json"}))
    link.download = name
    link.click()
    setTimeout(() => URL.revokeObjectURL(link.href), 10000)
  }

  // A control may be inside any pane's shadow tree.
  const find = (tree, selector) => {
    const found = tree.querySelector(selector)
    if (found) return found
    for (const host of tree.querySelectorAll("*")) {
      const inside = host.shadowRoot && find(host.shadowRoot, selector)
      if (inside) return inside
    }
    return null
  }

  const wear = (theme) => {
    root.dataset.theme = theme
    try { localStorage.setItem("heat-studio-theme", theme) } catch { /* storage may be forbidden */ }
  }

  model.on("msg:custom", (message) => {
    if ("remember" in message) remember(message.remember)
    if ("theme" in message) wear(message.theme)
    if ("title" in message) document.title = `${message.title} – Heat-Spreader Layout Studio`
    for (const name of ["sheets", "difference", "active"])
      if (name in message) document.getElementById("studio").dataset[name] = message[name]
    if ("unsaved" in message) unsaved = message.unsaved
    if ("download" in message) download(message.download)
    if ("press" in message) find(document, `[data-name="${CSS.escape(message.press)}"]`)?.click()
  })

  const guard = (event) => {
    if (unsaved && !lost) event.preventDefault()
  }
  window.addEventListener("beforeunload", guard)

  // Once the connection is lost nothing that is done here would be kept: the page waits for its server and
  // loads itself again; the desk is autosaved there.
  const veil = document.getElementById("lost")
  const wait = async () => {
    for (;;) {
      await new Promise((resolve) => setTimeout(resolve, 700))
      try {
        if ((await fetch("static/js/bokeh.min.js", {method: "HEAD", cache: "no-store"})).ok) break
      } catch { /* not there yet */ }
    }
    location.reload()
  }
  const leave = () => {
    if (lost) return
    lost = true
    root.dataset.connection = "lost"
    if (veil && !veil.open) veil.showModal()
    wait()
  }
  let leaving = false
  window.addEventListener("pagehide", () => { leaving = true })
  for (const page of window.Bokeh.documents) page.on_event("connection_lost", () => { if (!leaving) leave() })
  model.on("remove", () => window.removeEventListener("beforeunload", guard))

  root.dataset.connection = "connected"
  let preferred = null
  try { preferred = localStorage.getItem("heat-studio-theme") } catch { /* storage may be forbidden */ }
  const dark = preferred ? preferred === "dark" : matchMedia("(prefers-color-scheme: dark)").matches
  model.send_msg({hello: {dark}})
}
