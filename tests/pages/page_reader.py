"""Reads what a page holds: ids, labels, headings, forms with their fields and buttons."""

from dataclasses import dataclass, field
from html.parser import HTMLParser


@dataclass
class ReadForm:
    """A form: where it goes, its hidden fields, its controls, its buttons."""

    action: str
    classes: list[str]
    values: dict[str, str] = field(default_factory=dict)
    buttons: list[dict[str, str]] = field(default_factory=list)


class ReadPage(HTMLParser):
    """What was found in a page or in fragments."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.ids: list[str] = []
        self.labelled: set[str] = set()
        self.controls: list[dict[str, str]] = []
        self.forms: list[ReadForm] = []
        self.headings: list[str] = []
        self.links: list[str] = []
        self.oob: list[str] = []
        self.text: list[str] = []
        self._form: ReadForm | None = None
        self._select: str | None = None
        self._area: str | None = None
        self.feed(text)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        had = {name: value or "" for name, value in attrs}
        if "id" in had:
            self.ids.append(had["id"])
        if "hx-swap-oob" in had:
            self.oob.append(had.get("id", ""))
        if tag == "label" and "for" in had:
            self.labelled.add(had["for"])
        if tag in ("h1", "h2", "h3", "h4"):
            self.headings.append(tag)
        if tag == "a":
            self.links.append(had.get("href", ""))
        if tag == "form":
            self._form = ReadForm(had.get("action", ""), had.get("class", "").split())
            self.forms.append(self._form)
        if tag in ("input", "select", "textarea"):
            self.controls.append(had | {"tag": tag})
            self._control(tag, had)
        if tag == "option" and self._form is not None and self._select and "selected" in had:
            self._form.values[self._select] = had.get("value", "")
        if tag == "button" and self._form is not None:
            self._form.buttons.append(had)

    def _control(self, tag: str, had: dict[str, str]) -> None:
        if self._form is None or "name" not in had:
            return
        name = had["name"]
        if tag == "select":
            self._select = name
            self._form.values.setdefault(name, "")
        elif tag == "textarea":
            self._area = name
            self._form.values[name] = ""
        elif had.get("type") != "radio" or "checked" in had:
            self._form.values[name] = had.get("value", "")

    def handle_endtag(self, tag: str) -> None:
        if tag == "form":
            self._form = None
        if tag == "select":
            self._select = None
        if tag == "textarea":
            self._area = None

    def handle_data(self, data: str) -> None:
        if self._area is not None and self._form is not None:
            self._form.values[self._area] += data
        self.text.append(data)

    @property
    def words(self) -> str:
        """The text of the page, in one line."""
        return " ".join(" ".join(self.text).split())

    def form_of(self, path: str, op: str = "set") -> ReadForm:
        """Return the form that edits a field, or that has the button of another operation."""
        for form in self.forms:
            ops = [b.get("value") for b in form.buttons if b.get("name") == "op"]
            ops.append(form.values.get("op"))
            if form.values.get("path") == path and op in ops:
                return form
        raise AssertionError(f"no form {op} {path}; there are {sorted(self.paths)}")

    @property
    def paths(self) -> set[str]:
        """Paths that the forms of the page edit."""
        return {form.values["path"] for form in self.forms if "path" in form.values}
