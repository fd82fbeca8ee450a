// A recording of another day: its bytes go to the program on this computer.
export async function upload(file, says) {
  if (!file) return;
  says.textContent = "reading " + file.name + " ...";
  try {
    const answer = await fetch("/open", { method: "POST", headers: { "Content-Type": "application/octet-stream" }, body: file });
    const text = (await answer.text()).trim();
    if (!answer.ok) throw new Error(text);
    location.hash = "result/" + JSON.parse(text).id;
  } catch (e) {
    says.textContent = e.message;
  }
}
