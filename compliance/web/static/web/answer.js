// An answer about one tank must not stand there while another one is asked for, nor if asking fails.
document.addEventListener("htmx:beforeRequest", (event) => {
  if (event.detail.target.id === "answer") event.detail.target.replaceChildren();
});
